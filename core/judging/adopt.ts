import { type AlarmState, waits } from "../alarms/index.ts";
import { advanceAll } from "./advance-alarm.ts";
import { removedNote } from "./alarms.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import { freshState, type StreamState } from "./state.ts";

/**
 * Takes up a stream's state at a start, or under a new limit set: alarms and detectors that the limit set does not have any more end, with
 * a note; what ran out meanwhile (a shelf, say) ends now. Pure.
 *
 * @param at wall clock, epoch ms
 */
export function adopt(kept: StreamState, at: number, rules: StreamRules): [StreamState, Note[]] {
  const state = { ...freshState, ...kept }; // an older version did not keep all of it
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
  const [next, more] = advanceAll(adopted, { kind: "wall clock", at }, rules);
  return [next, [...notes, ...more]];
}

/** An alarm that has become one for the record only waits for nobody any more. */
function askingNobody(alarm: AlarmState): AlarmState | undefined {
  if (!waits(alarm) && alarm.standing !== "latched acknowledged") return alarm;
  return alarm.active ? { ...alarm, standing: "acknowledged", times: 0 } : undefined;
}
