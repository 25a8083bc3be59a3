import type { AlarmEvent } from "../alarms/index.ts";
import type { AlarmRule } from "../limit-set/index.ts";
import type { ProcessState } from "../messages/index.ts";
import { advanceAlarm } from "./advance-alarm.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import type { StreamState } from "./state.ts";

export type ProcessJudgement =
  | { kind: "heard"; notes: Note[] }
  /** the plant says again what it said: the message is retained, and comes with every connection */
  | { kind: "repeat" }
  | { kind: "refused"; reason: "future" | "late"; says: string };

/**
 * The plant says what state a stream's process is in. Kept with the stream and put on record when it changes; alarms that mean nothing in
 * that state are suppressed by design, and come back when the process has left it and the line had time to be swept out. Pure.
 *
 * @param receivedAt wall clock, epoch ms
 */
export function hearProcessState(
  state: StreamState,
  heard: ProcessState,
  receivedAt: number,
  rules: StreamRules,
): [StreamState, ProcessJudgement] {
  const known = state.process;
  const same = known?.state === heard.state && known?.grade === heard.grade;
  if (known && same && heard.since <= known.since) return [state, { kind: "repeat" }];
  if (heard.since - receivedAt > rules.futureToleranceMs) {
    const says = `its time is ${Math.round((heard.since - receivedAt) / 1000)} s ahead of this clock. Set the clock of what sends it.`;
    return [state, { kind: "refused", reason: "future", says }];
  }
  if (known && heard.since < known.since) {
    const says = `it is older than the state that is known: ${known.state} since ${new Date(known.since).toISOString()}`;
    return [state, { kind: "refused", reason: "late", says }];
  }
  let next: StreamState = { ...state, process: heard };
  const notes: Note[] = same ? [] : [changeNote(known, heard, rules.stream)];
  for (const rule of rules.limitSet.alarms) {
    const step = advanceAlarm(next, rule, suppressionEvent(rule, heard), rules);
    next = step.state;
    notes.push(...step.notes);
  }
  return [next, { kind: "heard", notes }];
}

/** What a state of the process means to an alarm. */
export function suppressionEvent(rule: AlarmRule, { state, since }: ProcessState): AlarmEvent {
  const { suppressedIn = [], suppressedForMinutesAfter = 0 } = rule;
  if (suppressedIn.includes(state)) return { kind: "suppress", at: since, state };
  return { kind: "leave suppressing state", at: since, until: since + suppressedForMinutesAfter * 60_000 };
}

function changeNote(before: ProcessState | null, process: ProcessState, stream: string): Note {
  const { state, grade, since } = process;
  const from = before && before.state !== state ? `, before: ${before.state}` : "";
  const made = grade === undefined ? "" : `, grade ${grade}`;
  return { at: since, stream, kind: "process state", says: `The process is ${state}${made}${from}.`, process };
}

/**
 * Process time as well as it can be told at a moment without a reading: that of the newest reading, and the wall clock's progress since it
 * was received. An analyzer's clock may be off; the time that passes is the same.
 */
export function processTimeAt({ latest, receivedAt }: StreamState, now: number): number {
  return latest && receivedAt !== null ? latest.time + Math.max(0, now - receivedAt) : now;
}
