import type { ActionLine, CheckLine, EntryOf, HandoverEntry, ShiftRecord } from "../messages/index.ts";
import { entryTitle } from "./entry-words.ts";
import { type Markup, markup } from "./markup.ts";
import type { Pen } from "./record-page.ts";

/** What people wrote, told apart from what the machine filled in: each with who and when. */
export function peopleSections(record: ShiftRecord, pen: Pen): Markup[] {
  const section = (title: string, items: readonly Markup[]) =>
    items.length === 0
      ? []
      : [markup`<section><h2>${title}</h2><ul>${items.map((item) => markup`<li>${item}</li>`)}</ul></section>`];
  const notes = record.notes.filter((entry): entry is EntryOf<"note"> => entry.kind === "note");
  return [
    ...section(
      "Actions, carried over until they are closed",
      record.actions.map((each) => action(each, record.to, pen)),
    ),
    ...section(
      "Required checks",
      record.checks.map((each) => check(each, pen)),
    ),
    ...section(
      "Notes by people",
      notes.map((note) => markup`${subject(note, pen)}${note.says} ${signed(note, pen)}`),
    ),
  ];
}

function action({ says, owner, due, closed, number, at, by }: ActionLine, to: number, { when }: Pen): Markup {
  const state = closed
    ? markup`done by ${closed.by}, ${when(closed.at)}${closed.says === undefined ? "" : `: ${closed.says}`}`
    : markup`<b>open${due !== undefined && due <= to ? ", overdue" : ""}</b>`;
  return markup`${number}: ${says} For ${owner}${due === undefined ? "" : `, due ${when(due)}`}; ${state}. <span class="by">${by}, ${when(at)}</span>`;
}

function check({ says, entry }: CheckLine, pen: Pen): Markup {
  if (entry?.kind !== "check") return markup`${says}: <b>nobody has ticked it.</b>`;
  const words = entry.says === undefined ? "" : ` (${entry.says})`;
  return markup`${says}: ${entry.outcome === "done" ? "done" : markup`<b>not done</b>`}${words} ${signed(entry, pen)}`;
}

function subject({ about }: EntryOf<"note">, { name }: Pen): Markup | string {
  if (about.kind === "shift") return "";
  const what = about.kind === "stream" ? "" : about.kind === "alarm" ? `, alarm ${about.key}` : ", excursion";
  return markup`<b>${name(about.stream)}</b>${what}: `;
}

/** Who wrote it and when; a clock that had been set back is said, since the time then tells no order. */
export function signed({ by, at, clockBackMs }: HandoverEntry, { when, time }: Pen): Markup {
  const back = clockBackMs === undefined ? "" : ", after the clock was set back";
  return markup`<span class="by" title="${time.full(at)}">${by}, ${when(at)}${back}</span>`;
}

/** An entry with what it is, for the list of what stands beside a signed record. */
export function entryLine(entry: HandoverEntry, pen: Pen): Markup {
  const text = entry.kind === "signature" ? "" : (entry.says ?? "");
  return markup`<b>${entry.number}, ${entryTitle(entry)}</b>${text === "" ? "" : `: ${text}`} ${signed(entry, pen)}`;
}
