import {
  type AlarmEvent,
  type AlarmState,
  conditionOf,
  detect,
  followDrift,
  isSetAside,
  restingDetector,
  type Signal,
  stateWord,
} from "../alarms/index.ts";
import type { AlarmRule } from "../limit-set/index.ts";
import type { Judged, OpenAlarm, SetAsideAlarm } from "../messages/index.ts";
import { advanceAlarm, advanceAll } from "./advance-alarm.ts";
import { openAlarmOf, setAsideOf } from "./alarm-notes.ts";
import { evidence } from "./evidence.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import type { StreamState } from "./state.ts";
import { short } from "./words.ts";

/** One judged reading through every alarm of its stream. Pure. */
export function runAlarms(
  state: StreamState,
  judged: Judged,
  { frozen }: { frozen: boolean },
  rules: StreamRules,
): [StreamState, Note[]] {
  const [timed, notes] = advanceAll(state, { kind: "process time", at: judged.time }, rules);
  const drifts = followDrifts(timed, judged, rules);
  const detectors = { ...timed.detectors };
  let next: StreamState = { ...timed, drifts, detectors };
  for (const rule of rules.limitSet.alarms) {
    const surroundings = { unusable: state.unusable, frozen, drift: drifts[rule.key] };
    const condition = conditionOf(rule, judged, surroundings);
    const [detector, signal] = detect(detectors[rule.key] ?? restingDetector, condition, judged.time, rule);
    detectors[rule.key] = detector;
    const event = eventOf(signal, judged.time, rules.limitSet.version, () => evidence(rule, judged, next, rules));
    if (!event) continue;
    const step = advanceAlarm(next, rule, event, rules);
    next = step.state;
    notes.push(...step.notes);
  }
  return [next, notes];
}

function followDrifts({ drifts }: StreamState, { ratios, time }: Judged, rules: StreamRules): StreamState["drifts"] {
  if (ratios.q === null) return drifts;
  let next = drifts;
  for (const { key, watches } of rules.limitSet.alarms) {
    if (watches.kind !== "drifting") continue;
    const followed = followDrift(drifts[key], ratios.q, time, watches.timeConstantMinutes * 60_000);
    next = { ...next, [key]: followed };
  }
  return next;
}

/** Raises "silent" alarms whose time has come: `lastHeard` is when the last reading was received, or when listening began. Pure. */
export function silenceUntil(
  state: StreamState,
  now: number,
  lastHeard: number,
  rules: StreamRules,
): [StreamState, Note[]] {
  let next = state;
  const notes: Note[] = [];
  for (const rule of rules.limitSet.alarms) {
    if (rule.watches.kind !== "silent" || next.detectors[rule.key]?.active) continue;
    const dueAt = lastHeard + rule.watches.periods * rules.periodMs;
    if (now < dueAt) continue;
    const detector = { ...restingDetector, active: true };
    next = { ...next, detectors: { ...next.detectors, [rule.key]: detector } };
    const says = `No reading for ${rule.watches.periods} periods of ${short(rules.periodMs / 1000)} s.`;
    const event: AlarmEvent = { kind: "raise", at: dueAt, since: lastHeard, says, limitSet: rules.limitSet.version };
    const step = advanceAlarm(next, rule, event, rules);
    next = step.state;
    notes.push(...step.notes);
  }
  return [next, notes];
}

/** Every alarm of the stream that is annunciated, as it is shown: highest priority first, then the newest. */
export function openAlarms(state: StreamState, rules: StreamRules): OpenAlarm[] {
  return withState(state, rules)
    .filter(([rule, alarm]) => rule.priority !== "record only" && !isSetAside(alarm))
    .map(([rule, alarm]) => openAlarmOf(rules.stream, rule, alarm))
    .sort((a, b) => rank(a) - rank(b) || b.raisedAt - a.raisedAt);
}

/** Every alarm of the stream that is shelved, suppressed by design or out of service: highest priority first. */
export function setAsideAlarms(state: StreamState, rules: StreamRules): SetAsideAlarm[] {
  return withState(state, rules)
    .filter(([rule, alarm]) => rule.priority !== "record only" && isSetAside(alarm))
    .map(([rule, alarm]) => setAsideOf(rules.stream, rule, alarm))
    .sort((a, b) => rank(a) - rank(b));
}

function withState({ alarms }: StreamState, rules: StreamRules): [AlarmRule, AlarmState][] {
  return rules.limitSet.alarms.flatMap((rule): [AlarmRule, AlarmState][] => {
    const alarm = alarms[rule.key];
    return alarm ? [[rule, alarm]] : [];
  });
}

const order = ["high", "medium", "low", "record only"];
function rank({ priority }: { priority: string }): number {
  return order.indexOf(priority);
}

function eventOf(signal: Signal, at: number, limitSet: number, says: () => string): AlarmEvent | undefined {
  switch (signal.kind) {
    case "raise":
      return { kind: "raise", at, since: signal.since, says: says(), limitSet };
    case "clear":
      return { kind: "clear", at };
    default:
      return undefined;
  }
}

/** What `adopt` says of an alarm that is no more. */
export function removedNote(key: string, alarm: AlarmState, at: number, rules: StreamRules): Note {
  const says = `${key}: limit set ${rules.limitSet.version} has this alarm no more; it was ${stateWord(alarm)}.`;
  return { at, stream: rules.stream, kind: "alarm removed", key, says };
}
