import type { HandoverEntry, ShiftRecord } from "../messages/index.ts";
import { duration, type PlantTime, plantTime } from "../words/index.ts";
import { emptySections, machineSections } from "./machine-sections.ts";
import { type Markup, markup } from "./markup.ts";
import { peopleSections } from "./people-sections.ts";
import { signatureSection } from "./signature-section.ts";
import { handoverStanding } from "./standing.ts";
import { streamSection } from "./stream-section.ts";

/** A shift's record bound with what people wrote to the shift, signatures among it. */
export interface PageInput {
  record: ShiftRecord;
  /** of the record that the outgoing side signed; null: nobody has */
  hash: string | null;
  entries: readonly HandoverEntry[];
  /** what is kept under the hash no longer fits it */
  altered?: true;
}

/** How a part of the page writes times and names. */
export interface Pen {
  time: PlantTime;
  /** a moment, with its day where that is not the record's last */
  when: (at: number) => string;
  /** a stream by its name */
  name: (stream: string | null) => string;
}

/** The record as HTML, the same on the screen, in an exported file and on paper. What matters most stands first. */
export function recordPage({ record, hash, entries, altered }: PageInput): Markup {
  const time = plantTime(record.timeZone);
  const names = new Map(record.streams.map(({ stream, name }) => [stream, name]));
  const pen: Pen = {
    time,
    when: (at) => time.brief(at, record.to),
    name: (stream) => (stream === null ? "plant" : (names.get(stream) ?? stream)),
  };
  return markup`<article class="record">
    ${head(record, entries, pen)}
    ${altered ? markup`<p class="state">This record no longer fits the hash that was signed: it was changed past all doors. Do not rely on it; compare with a backup.</p>` : ""}
    ${leadSection(record)}
    ${streamSection(record, pen)}
    ${machineSections(record, pen)}
    ${peopleSections(record, pen)}
    ${emptySections(record)}
    ${signatureSection({ record, hash, entries }, pen)}
    <p class="caution"><b>Caution:</b> ${record.caution}</p>
  </article>`;
}

function head(
  { shift, from, to, plant, demo, madeAt }: ShiftRecord,
  entries: readonly HandoverEntry[],
  { time }: Pen,
): Markup {
  const team = shift.team === undefined ? "" : `, team ${shift.team}`;
  const covered =
    from !== shift.from || to !== shift.to ? ` This record tells ${minute(from, time)} to ${minute(to, time)}.` : "";
  return markup`<header>
    <h1>${plant}: ${shift.name}${team}</h1>
    <p>${minute(shift.from, time)} to ${minute(shift.to, time)} (${duration(shift.to - shift.from)}).${covered}
      <span class="quiet">Drawn up ${time.full(madeAt)}${demo ? "; an invented plant" : ""}.</span></p>
    ${stateLine(entries, { to, shift }, time)}
  </header>`;
}

/** "2026-12-01 06:00 UTC+1": a shift begins on a minute. */
function minute(at: number, time: PlantTime): string {
  return `${time.full(at).slice(0, 16)} ${time.zoneName(at)}`;
}

function stateLine(
  entries: readonly HandoverEntry[],
  { to, shift }: Pick<ShiftRecord, "to" | "shift">,
  time: PlantTime,
): Markup {
  const { is, outgoing, incoming, unanswered } = handoverStanding(entries);
  const asked = unanswered.length > 0 ? ` ${unanswered.length} unanswered by the outgoing side.` : "";
  if (is === "taken over") {
    return markup`<p class="state">Handed over by ${outgoing!.by}, taken over by ${incoming!.by} on ${time.full(incoming!.at)}. The record is frozen.${asked}</p>`;
  }
  if (is === "offered") {
    return markup`<p class="state waits">Signed by ${outgoing!.by} on ${time.full(outgoing!.at)}; nobody has taken the shift over yet.${asked}</p>`;
  }
  return markup`<p class="state waits">${to < shift.to ? "This shift runs. It is not signed." : "Not handed over: nobody has signed this shift."}</p>`;
}

const groups = [
  { weight: "act", title: "Open: needs somebody" },
  { weight: "know", title: "Worth knowing" },
  { weight: "fine", title: "In short" },
] as const;

function leadSection({ lead }: ShiftRecord): Markup[] {
  return groups.flatMap(({ weight, title }) => {
    const items = lead.filter((each) => each.weight === weight);
    if (items.length === 0) return [];
    return [
      markup`<section><h2>${title}</h2><ul>${items.map(({ says }) => markup`<li class="${weight}">${says}</li>`)}</ul></section>`,
    ];
  });
}
