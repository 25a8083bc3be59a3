import { type AlarmEvent, type AlarmRecord, advance, type LifecycleRules } from "../alarms/index.ts";
import { type AlarmRule, mostShelvedMinutes } from "../limit-set/index.ts";
import { alarmNote } from "./alarm-notes.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import type { StreamState } from "./state.ts";

const minute = 60_000;

/** What of an alarm's rule its lifecycle depends on. */
export function lifecycleRules(rule: AlarmRule): LifecycleRules {
  return {
    annunciates: rule.priority !== "record only",
    latching: rule.latching ?? false,
    mostShelvedMs: (rule.mostShelvedMinutes ?? mostShelvedMinutes) * minute,
    ...(rule.remindAfterMinutes === undefined ? {} : { remindAfterMs: rule.remindAfterMinutes * minute }),
  };
}

/** One event through the lifecycle of one alarm of a stream, and what goes on record. The same `state` when nothing changed. Pure. */
export function advanceAlarm(
  state: StreamState,
  rule: AlarmRule,
  event: AlarmEvent,
  { stream }: Pick<StreamRules, "stream">,
): { state: StreamState; notes: Note[]; records: AlarmRecord[] } {
  const before = state.alarms[rule.key];
  const [after, records] = advance(before, event, lifecycleRules(rule));
  const notes = records.map((record) => alarmNote(stream, rule, record, { before, after }));
  if (after === before) return { state, notes, records };
  const { [rule.key]: _, ...others } = state.alarms;
  return { state: { ...state, alarms: after ? { ...others, [rule.key]: after } : others }, notes, records };
}

/** The same event for every alarm that has a state: time passes. The same `state` when nothing changed. */
export function advanceAll(
  state: StreamState,
  event: Extract<AlarmEvent, { kind: "process time" | "wall clock" }>,
  rules: StreamRules,
): [StreamState, Note[]] {
  let next = state;
  const notes: Note[] = [];
  for (const rule of rules.limitSet.alarms) {
    if (state.alarms[rule.key] === undefined) continue;
    const step = advanceAlarm(next, rule, event, rules);
    next = step.state;
    notes.push(...step.notes);
  }
  return [next, notes];
}
