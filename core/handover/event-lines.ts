import type { EventLine, RecordedEvent, ShiftRecord } from "../messages/index.ts";

/** Which events are told under which heading; the first word of their kind decides. */
const headings = {
  /** limits and models: what judges the readings is another one from there on */
  changes: (kind: string) => /^(limits|model|bias|candidate) (?!file)/.test(kind),
  process: (kind: string) => kind === "process state",
  service: (kind: string) => /^(service|broker|model file|sequence|history) /.test(kind),
} satisfies Partial<Record<keyof ShiftRecord, (kind: string) => boolean>>;

/** The events of a shift that are told one by one, in the order of the record. */
export function eventLines(events: readonly RecordedEvent[]): Pick<ShiftRecord, keyof typeof headings> {
  const under = (heading: keyof typeof headings) => events.filter(({ kind }) => headings[heading](kind)).map(lineOf);
  return { changes: under("changes"), process: under("process"), service: under("service") };
}

function lineOf({ at, stream, kind, says, by }: RecordedEvent): EventLine {
  return { at, stream, kind, says, ...(by === undefined ? {} : { by }) };
}

/** A server's clock may be corrected by a little at any time without anything being wrong. */
const slackMs = 2_000;

/**
 * Where the server's clock was set back: an event bears an earlier time than the one before it in the record. Only of events that bear the
 * server's own time; those of alarms and excursions bear the analyzers'.
 */
export function clockSteps(events: readonly RecordedEvent[]): ShiftRecord["clockSteps"] {
  const own = events.filter(({ kind, history }) => !history && /^(service|broker|signed|handover|limits) /.test(kind));
  return own.slice(1).flatMap(({ at }, i) => {
    const backMs = own[i].at - at;
    return backMs > slackMs ? [{ at, backMs }] : [];
  });
}
