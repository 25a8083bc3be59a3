import type { HandoverEntry, ShiftRecord, TimeKind } from "../messages/index.ts";
import { timeKinds } from "../messages/index.ts";
import { type CsvCell, csvOf, plantTime } from "../words/index.ts";
import { entryText, entryTitle } from "./entry-words.ts";

const header = ["section", "stream", "what", "from (UTC)", "from (plant)", "to (UTC)", "value", "unit", "says", "by"];

interface Row {
  stream?: string | null;
  what: string;
  from?: number;
  to?: number;
  value?: CsvCell;
  unit?: string;
  says?: string;
  by?: string;
}

/** A shift's record as one table for a spreadsheet: a line for each thing that it tells, section by section. */
export function recordCsv(record: ShiftRecord, entries: readonly HandoverEntry[]): string {
  const time = plantTime(record.timeZone);
  const line = (section: string, { stream, what, from, to, value, unit, says, by }: Row): CsvCell[] => [
    ...[section, stream ?? "", what],
    ...[from === undefined ? "" : new Date(from).toISOString(), from === undefined ? "" : time.full(from)],
    ...[to === undefined ? "" : new Date(to).toISOString(), value, unit, says, by],
  ];
  const lines = (section: string, rows: readonly Row[]) => rows.map((row) => line(section, row));
  const { shift, open, alarms } = record;
  return csvOf([
    header,
    line("shift", {
      what: shift.name,
      from: shift.from,
      to: shift.to,
      says: shift.team === undefined ? "" : `team ${shift.team}`,
    }),
    ...lines(
      "lead",
      record.lead.map(({ weight, stream, says }) => ({ stream, what: weight, says })),
    ),
    ...record.streams.flatMap((part) => lines("stream", streamRows(part))),
    ...lines(
      "open alarm",
      open.alarms.map(({ stream, title, since, says, state }) => ({
        stream,
        what: title,
        from: since,
        value: state,
        says,
      })),
    ),
    ...lines(
      "set aside",
      open.setAside.map(({ stream, title, state, outOfService, shelved }) => ({
        ...{ stream, what: title, value: state, says: outOfService?.reason ?? shelved?.reason ?? "" },
        to: outOfService?.until ?? shelved?.until,
        by: outOfService?.by ?? shelved?.by,
      })),
    ),
    ...lines(
      "excursion",
      record.excursions.map(({ stream, kind, start, end, peak, unit, says, label }) => ({
        ...{ stream, what: kind, from: start, to: end, value: peak, unit, says: label ? `${label.is}. ${says}` : says },
        by: label?.by,
      })),
    ),
    ...lines(
      "alarm",
      alarms.list.map(({ stream, title, first, last, count, priority, by }) => ({
        ...{
          stream,
          what: title,
          from: first,
          to: last,
          value: count,
          unit: "times",
          says: priority,
          by: by.join(", "),
        },
      })),
    ),
    ...(["changes", "process", "service"] as const).flatMap((section) =>
      lines(
        section,
        record[section].map(({ at, stream, kind, says, by }) => ({ stream, what: kind, from: at, says, by })),
      ),
    ),
    ...lines(
      "laboratory",
      record.laboratory.map(({ stream, property, at, laboratory, unit, says }) => ({
        ...{ stream, what: property, from: at, value: laboratory, unit, says },
      })),
    ),
    ...lines(
      "refused",
      record.refused.map(({ stream, reason, first, last, count, says }) => ({
        ...{ stream, what: reason, from: first, to: last, value: count, unit: "times", says },
      })),
    ),
    ...lines(
      "action",
      record.actions.map(({ number, owner, says, at, due, by, closed }) => ({
        ...{ what: `${number} for ${owner}`, from: at, to: due, value: closed ? "done" : "open", says, by },
      })),
    ),
    ...lines(
      "check",
      record.checks.map(({ says, entry }) => ({
        ...{
          what: says,
          value: entry?.kind === "check" ? entry.outcome : "nobody has ticked it",
          from: entry?.at,
          by: entry?.by,
        },
      })),
    ),
    ...lines(
      "entry",
      entries.map((entry) => ({
        ...{ what: `${entry.number} ${entryTitle(entry)}`, from: entry.at, says: entryText(entry), by: entry.by },
      })),
    ),
  ]);
}

function streamRows({ stream, says, account }: ShiftRecord["streams"][number]): Row[] {
  return [
    { stream, what: "in words", says },
    ...timeKinds.map((kind: TimeKind) => ({ stream, what: `time ${kind}`, value: account.ms[kind] / 1000, unit: "s" })),
    ...account.properties.flatMap(({ name, unit, mean, min, max, outsideMs }) => [
      { stream, what: `${name} mean`, value: mean, unit },
      { stream, what: `${name} lowest`, value: min, unit },
      { stream, what: `${name} highest`, value: max, unit },
      { stream, what: `${name} outside its target`, value: outsideMs / 1000, unit: "s" },
    ]),
    ...account.gaps.map(([from, to]) => ({ stream, what: "gap", from, to })),
  ];
}
