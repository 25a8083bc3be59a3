import type { HandoverEntry, NoteSubject } from "../messages/index.ts";

/** What an entry does, before its own words: "note on bq-305". */
export function entryTitle(entry: HandoverEntry): string {
  switch (entry.kind) {
    case "note":
      return `note${subjectWords(entry.about)}`;
    case "action":
      return `action for ${entry.owner}`;
    case "action closed":
      return `action ${entry.refers} closed`;
    case "check":
      return `check "${entry.check}" ${entry.outcome}`;
    case "question":
    case "objection":
      return entry.kind;
    case "answer":
      return `answer to ${entry.refers}`;
    case "signature":
      return `signed as the ${entry.side} side`;
    default:
      return entry satisfies never;
  }
}

/** The words that a person wrote; what a signature means. Empty where there are none. */
export function entryText(entry: HandoverEntry): string {
  return entry.kind === "signature" ? entry.meaning : (entry.says ?? "");
}

function subjectWords(about: NoteSubject): string {
  switch (about.kind) {
    case "shift":
      return "";
    case "stream":
      return ` on ${about.stream}`;
    case "excursion":
      return ` on the excursion ${about.id}`;
    case "alarm":
      return ` on the alarm ${about.key} of ${about.stream}`;
    default:
      return about satisfies never;
  }
}

/** An entry as a sentence of the plant's record. */
export function entryWords(entry: HandoverEntry): string {
  const text = entryText(entry);
  const what = `Shift of ${new Date(entry.shift).toISOString()}: ${entryTitle(entry)} by ${entry.by}`;
  const beside = entry.amends ? ", beside the signed record" : "";
  return `${what}${beside}${text === "" ? "" : `: ${text}`}`;
}
