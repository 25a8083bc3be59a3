import type { BoundRecord } from "../../core/messages/index.ts";
import { Markup, markup, recordCsv, recordPage, recordStyle } from "../../core/shift-page/index.ts";
import { plantTime } from "../../core/words/index.ts";
import { reportStyle } from "../report/style.ts";

export const recordFormats = ["html", "csv", "json"] as const;
export type RecordFormat = (typeof recordFormats)[number];

export const recordTypes: Record<RecordFormat, string> = {
  html: "text/html; charset=utf-8",
  csv: "text/csv; charset=utf-8",
  json: "application/json; charset=utf-8",
};

/** A shift's record as a file that needs nothing else. */
export function recordFile(bound: BoundRecord, format: RecordFormat): string {
  switch (format) {
    case "html":
      return recordHtml(bound);
    case "csv":
      return recordCsv(bound.record, bound.entries);
    case "json":
      return `${JSON.stringify(bound, null, 2)}\n`;
    default:
      return format satisfies never;
  }
}

/** "brindle-quay-2026-12-01-0600-day.html" */
export function recordFileName({ record }: BoundRecord, format: RecordFormat): string {
  const begun = plantTime(record.timeZone).full(record.shift.from).slice(0, 16).replace(" ", "-").replace(":", "");
  const name = record.shift.name.toLowerCase().replaceAll(/[^a-z0-9]+/g, "-");
  return `${record.site}-${begun}-${name}.${format}`;
}

const colours = `
:root{--lane:var(--card);--edge:var(--quiet);--far:var(--extrapolated);--odd:var(--unfamiliar);--sparse:#0F6E6A}
@media screen and (prefers-color-scheme:dark){:root{--sparse:#5CC4BE}}
@page{margin:12mm}`;

function recordHtml(bound: BoundRecord): string {
  const { record } = bound;
  const title = `${record.plant}: ${record.shift.name}, ${plantTime(record.timeZone).full(record.shift.from)}`;
  return `<!doctype html>
${
  markup`<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width,initial-scale=1">
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'; font-src data:">
<title>${title}</title><style>${new Markup(reportStyle() + colours + recordStyle)}</style></head>
<body><main>
${recordPage(bound)}
</main></body></html>`.text
}
`;
}
