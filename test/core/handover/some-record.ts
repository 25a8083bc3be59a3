import { type ShiftFacts, shiftRecord } from "../../../core/handover/index.ts";
import type {
  OpenAlarm,
  RecordedEvent,
  SetAsideAlarm,
  Shift,
  ShiftRecord,
  StreamAccount,
} from "../../../core/messages/index.ts";

export const minute = 60_000;
export const hour = 60 * minute;
/** A Tuesday, 06:00 in Oslo. */
export const begin = Date.UTC(2026, 4, 12, 4);
export const shift: Shift = { from: begin, to: begin + 12 * hour, name: "Day", team: "Amber", staffed: true };

export function account(more: Partial<StreamAccount> = {}): StreamAccount {
  const ms = { inside: 12 * hour, unfamiliar: 0, extrapolated: 0, sparse: 0, unusable: 0, "no data": 0 };
  const ethanol = { name: "ethanol", unit: "wt%", decimals: 1, mean: 91.2, min: 89.9, max: 93.1, outsideMs: 0 };
  return { readings: 8640, ms, gaps: [], properties: [{ ...ethanol, target: [88, 94.5] }], ...more };
}

/** A shift in which nothing happened, but for what is given. */
export function facts(more: Partial<ShiftFacts> = {}): ShiftFacts {
  return {
    plant: { site: "quiet-quay", plant: "Quiet Quay", timeZone: "Europe/Oslo", demo: false, caution: "Advisory only." },
    shift,
    from: shift.from,
    to: shift.to,
    madeAt: shift.to,
    streams: [{ stream: "s-1", name: "Column overhead", account: account(), before: account(), trend: null }],
    events: [],
    alarmEvents: [],
    excursions: [],
    refused: [],
    laboratory: [],
    entries: [],
    actions: [],
    checks: [],
    ...more,
  };
}

export function record(more: Partial<ShiftFacts> = {}): ShiftRecord {
  return shiftRecord(facts(more));
}

let cursor = 0;
export function event(at: number, kind: string, more: Partial<RecordedEvent> = {}): RecordedEvent {
  return { cursor: ++cursor, at, stream: null, kind, says: `${kind}.`, ...more };
}

const purpose = {
  cause: "Something new in the line",
  consequence: "The number is not to be used",
  response: "Take a sample.",
  timeToRespondMinutes: 15,
};

export function alarm(at: number, more: Partial<OpenAlarm> = {}): OpenAlarm {
  const state = "unacknowledged" as const;
  return {
    ...{ stream: "s-1", key: "unfamiliar", title: "Unfamiliar spectrum", priority: "high", state, limitSet: 1 },
    ...{ since: at - 10_000, raisedAt: at, says: "Q 3.4 × limit", ...purpose },
    ...more,
  };
}

export function alarmEvent(at: number, kind: string, more: Partial<OpenAlarm> = {}): RecordedEvent {
  return event(at, `alarm ${kind}`, { stream: more.stream ?? "s-1", alarm: alarm(at, more) });
}

export function setAside(more: Partial<SetAsideAlarm>): SetAsideAlarm {
  const named = { stream: "s-1", key: "silent", title: "Analyzer silent", priority: "medium" as const };
  return { ...named, state: "shelved", active: false, ...purpose, ...more };
}
