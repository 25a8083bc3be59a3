import type {
  ActionLine,
  CheckLine,
  EntryOf,
  Excursion,
  HandoverEntry,
  RecordedEvent,
  Shift,
  ShiftLabLine,
  ShiftRecord,
  StreamPart,
} from "../messages/index.ts";
import { plantTime } from "../words/index.ts";
import { alarmPart } from "./alarm-part.ts";
import { clockSteps, eventLines } from "./event-lines.ts";
import { leadOf } from "./lead.ts";
import { openAlarmsAt } from "./open-at.ts";
import { streamWords } from "./stream-words.ts";

/** A check that a shift has to do. */
export interface RequiredCheck {
  key: string;
  says: string;
  /** names of the shifts that do it; absent: every one */
  shifts?: string[];
}

/** All that a shift's record is made of: plain data out of the record of the plant. */
export interface ShiftFacts {
  plant: Pick<ShiftRecord, "site" | "plant" | "timeZone" | "demo" | "caution">;
  shift: Shift;
  from: number;
  to: number;
  madeAt: number;
  streams: Omit<StreamPart, "says">[];
  /** of `from` ≤ time < `to`, in the order of the record */
  events: readonly RecordedEvent[];
  /** of alarms, from some days before `from` on */
  alarmEvents: readonly RecordedEvent[];
  /** that touch the shift */
  excursions: readonly Excursion[];
  refused: ShiftRecord["refused"];
  laboratory: readonly ShiftLabLine[];
  /** of this shift */
  entries: readonly HandoverEntry[];
  /** written before `to` and not closed before `from`, with what closed them */
  actions: readonly { action: EntryOf<"action">; closed: EntryOf<"action closed"> | undefined }[];
  checks: readonly RequiredCheck[];
}

/** Makes the record of a shift. Pure: the same facts always make the same record. */
export function shiftRecord(facts: ShiftFacts): ShiftRecord {
  const { plant, shift, from, to, madeAt } = facts;
  const excursions = facts.excursions.map((each) => excursionAt(each, to)).sort((a, b) => a.start - b.start);
  const told = {
    format: "millrace-shift-record" as const,
    formatVersion: 1 as const,
    ...plant,
    ...{ shift, from, to, madeAt },
    streams: facts.streams.map((part) => ({ ...part, says: streamWords(part.account, part.before) })),
    open: {
      ...openAlarmsAt(facts.alarmEvents, to),
      excursions: excursions.filter(({ end }) => end === undefined),
    },
    excursions,
    alarms: alarmPart(facts.alarmEvents, facts),
    ...eventLines(facts.events),
    clockSteps: clockSteps(facts.events),
    laboratory: [...facts.laboratory],
    refused: facts.refused,
    notes: facts.entries.filter(({ kind }) => kind === "note"),
    actions: facts.actions
      .map(actionLine)
      .sort((a, b) => (a.due ?? Infinity) - (b.due ?? Infinity) || a.number - b.number),
    checks: checksOf(facts),
  };
  return { ...told, lead: leadOf(told, plantTime(plant.timeZone)) };
}

/** As it was known at a moment: one that ended later was open then. */
function excursionAt(excursion: Excursion, at: number): Excursion {
  if (excursion.end === undefined || excursion.end < at) return excursion;
  const { end: _, ended: __, ...open } = excursion;
  return open;
}

function actionLine({ action, closed }: ShiftFacts["actions"][number]): ActionLine {
  const { number, says, owner, due, at, by, shift } = action;
  return {
    ...{ number, says, owner, at, by, shift },
    ...(due === undefined ? {} : { due }),
    closed: closed
      ? { at: closed.at, by: closed.by, ...(closed.says === undefined ? {} : { says: closed.says }) }
      : null,
  };
}

function checksOf({ checks, shift, entries }: ShiftFacts): CheckLine[] {
  return checksFor(checks, shift).map(({ key, says }) => ({
    key,
    says,
    entry: entries.findLast((entry) => entry.kind === "check" && entry.check === key) ?? null,
  }));
}

/** Those of the plant's checks that this shift has to do. */
export function checksFor(checks: readonly RequiredCheck[], shift: Shift): RequiredCheck[] {
  if (!shift.staffed) return [];
  return checks.filter(({ shifts }) => shifts === undefined || shifts.includes(shift.name));
}
