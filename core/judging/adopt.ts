import { type Activation, type AlarmState, waits } from "../alarms/index.ts";
import { advanceAlarm, advanceAll } from "./advance-alarm.ts";
import { removedNote } from "./alarms.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import { suppressionEvent } from "./process-state.ts";
import { freshState, type StreamState } from "./state.ts";

/**
 * Takes up a stream's state at a start, or under a new limit set: alarms and detectors that the limit set does not have any more end, with
 * a note; what ran out meanwhile (a shelf, say) ends now; and what the limit set suppresses in the present state of the process is as it says.
 * Pure.
 *
 * @param at wall clock, epoch ms
 */
export function adopt(kept: StreamState, at: number, rules: StreamRules): [StreamState, Note[]] {
  const state = broughtUp(kept);
  const byKey = new Map(rules.limitSet.alarms.map((rule) => [rule.key, rule]));
  const keep = <T>(record: Record<string, T>) =>
    Object.fromEntries(Object.entries(record).filter(([key]) => byKey.has(key)));
  const notes = Object.entries(state.alarms)
    .filter(([key]) => !byKey.has(key))
    .map(([key, alarm]) => removedNote(key, alarm, at, rules));
  const alarms = Object.fromEntries(
    Object.entries(keep(state.alarms)).flatMap(([key, alarm]): [string, AlarmState][] => {
      const now = byKey.get(key)?.priority === "record only" ? askingNobody(alarm) : alarm;
      return now ? [[key, now]] : [];
    }),
  );
  const adopted = { ...state, alarms, detectors: keep(state.detectors), drifts: keep(state.drifts) };
  const [timed, timeNotes] = advanceAll(adopted, { kind: "wall clock", at }, rules);
  const [ruled, processNotes] = suppressedAsRuled(timed, at, rules);
  const [next, calls] = nowCalling(ruled, at, rules);
  return [next, [...notes, ...timeNotes, ...processNotes, ...calls]];
}

function suppressedAsRuled(state: StreamState, at: number, rules: StreamRules): [StreamState, Note[]] {
  const { process } = state;
  if (!process) return [state, []];
  let next = state;
  const notes: Note[] = [];
  for (const rule of rules.limitSet.alarms) {
    const event = suppressionEvent(rule, process);
    const step = advanceAlarm(next, rule, event.kind === "suppress" ? { ...event, at } : event, rules);
    next = step.state;
    notes.push(...step.notes);
  }
  return [next, notes];
}

/** An alarm that was for the record only until now, and holds: nobody was ever called for it, so somebody is called. */
function nowCalling(state: StreamState, at: number, rules: StreamRules): [StreamState, Note[]] {
  let next = state;
  const notes: Note[] = [];
  for (const rule of rules.limitSet.alarms) {
    const alarm = state.alarms[rule.key];
    const unseen = alarm?.standing === "acknowledged" && alarm.acknowledgedBy === undefined;
    if (rule.priority === "record only" || !unseen || !alarm.activation) continue;
    const { [rule.key]: _, ...others } = next.alarms;
    const step = advanceAlarm({ ...next, alarms: others }, rule, { kind: "raise", ...alarm.activation, at }, rules);
    next = step.state;
    notes.push(...step.notes);
  }
  return [next, notes];
}

/** What an older version of this program kept has less in it. */
function broughtUp(kept: StreamState): StreamState {
  const blank = { within: 0, made: [], regions: [], alarms: [] };
  const excursions = Object.entries(kept.excursions).map(([kind, open]) => [kind, { ...blank, ...open }]);
  const alarms = Object.entries(kept.alarms).map(([key, alarm]) => [key, "standing" in alarm ? alarm : ofOld(alarm)]);
  return {
    ...freshState,
    ...kept,
    excursions: Object.fromEntries(excursions),
    alarms: Object.fromEntries(alarms),
  };
}

/** The first form of an alarm's state: without standing, and never set aside. */
function ofOld(alarm: Activation & { active: boolean; unacknowledged: boolean }): AlarmState {
  const { active, unacknowledged, since, raisedAt, says, limitSet, ...rest } = alarm;
  const standing = active ? (unacknowledged ? "unacknowledged" : "acknowledged") : "returned unacknowledged";
  return { ...rest, active, standing, times: unacknowledged ? 1 : 0, activation: { since, raisedAt, says, limitSet } };
}

/** An alarm that has become one for the record only waits for nobody any more. */
function askingNobody(alarm: AlarmState): AlarmState | undefined {
  if (!waits(alarm) && alarm.standing !== "latched acknowledged") return alarm;
  return alarm.active ? { ...alarm, standing: "acknowledged", times: 0 } : undefined;
}
