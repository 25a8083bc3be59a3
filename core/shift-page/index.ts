export { entryText, entryTitle, entryWords } from "./entry-words.ts";
export { excursionWords } from "./excursion-words.ts";
export { Markup, markup } from "./markup.ts";
export { meanings } from "./meanings.ts";
export { recordCsv } from "./record-csv.ts";
export { type PageInput, recordPage } from "./record-page.ts";
export { type HandoverStanding, handoverStanding } from "./standing.ts";
export { recordStyle } from "./style.ts";
