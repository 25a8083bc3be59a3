import {
  type AlarmEvent,
  type AlarmRecord,
  type AlarmState,
  advance,
  conditionOf,
  detect,
  isUpper,
  restingDetector,
  type Signal,
  stateWord,
} from "../alarms/index.ts";
import type { AlarmRule } from "../limit-set/index.ts";
import type { Judged, OpenAlarm } from "../messages/index.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import type { StreamState } from "./state.ts";
import { extrapolatedWords, nothingExplained, short, sparseWords, unfamiliarWords } from "./words.ts";

/** One judged reading through every alarm of its stream. Pure. */
export function runAlarms(
  state: StreamState,
  judged: Judged,
  { frozen }: { frozen: boolean },
  rules: StreamRules,
): [StreamState, Note[]] {
  let next = state;
  const notes: Note[] = [];
  for (const rule of rules.limitSet.alarms) {
    const condition = conditionOf(rule, judged, {
      unusable: state.unusable,
      frozen,
    });
    const [detector, signal] = detect(next.detectors[rule.key] ?? restingDetector, condition, judged.time, rule);
    next = { ...next, detectors: { ...next.detectors, [rule.key]: detector } };
    const event = eventOf(signal, judged.time, rules.limitSet.version, () => evidence(rule, judged, rules));
    if (event) {
      const [alarmed, more] = advanceAlarm(next, rule, event, rules.stream);
      next = alarmed;
      notes.push(...more);
    }
  }
  return [next, notes];
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
    next = {
      ...next,
      detectors: {
        ...next.detectors,
        [rule.key]: { ...restingDetector, active: true },
      },
    };
    const says = `No reading for ${rule.watches.periods} periods of ${short(rules.periodMs / 1000)} s.`;
    const event: AlarmEvent = {
      kind: "raise",
      at: dueAt,
      since: lastHeard,
      says,
      limitSet: rules.limitSet.version,
    };
    const [alarmed, more] = advanceAlarm(next, rule, event, rules.stream);
    next = alarmed;
    notes.push(...more);
  }
  return [next, notes];
}

/** Somebody acknowledges an alarm. The notes say what came of it: a rejected one carries the reason. */
export function acknowledge(
  state: StreamState,
  key: string,
  { at, by, note }: { at: number; by: string; note?: string },
  rules: StreamRules,
): { state: StreamState; notes: Note[]; rejected?: string } {
  const rule = rules.limitSet.alarms.find((candidate) => candidate.key === key);
  if (!rule) {
    const keys = rules.limitSet.alarms.map((candidate) => candidate.key).join(", ");
    return {
      state,
      notes: [],
      rejected: `${rules.stream} has no alarm "${key}"; it has ${keys || "none"}`,
    };
  }
  const [, records] = advance(state.alarms[key], {
    kind: "acknowledge",
    at,
    by,
    note,
  });
  const refused = records.find((record) => record.kind === "rejected");
  if (refused) return { state, notes: [], rejected: `${rule.title}: ${refused.why}` };
  const [next, notes] = advanceAlarm(state, rule, { kind: "acknowledge", at, by, note }, rules.stream);
  return { state: next, notes };
}

/** A new limit set, or another model: alarms and detectors that it does not have any more end, with a note. */
export function adopt(state: StreamState, at: number, rules: StreamRules): [StreamState, Note[]] {
  const keys = new Set(rules.limitSet.alarms.map((rule) => rule.key));
  const gone = Object.keys(state.alarms).filter((key) => !keys.has(key));
  const keep = <T>(record: Record<string, T>) =>
    Object.fromEntries(Object.entries(record).filter(([key]) => keys.has(key)));
  const notes = gone.map((key) => ({
    at,
    stream: rules.stream,
    kind: "alarm removed",
    says: `${key}: limit set ${rules.limitSet.version} has this alarm no more; it was ${stateWord(state.alarms[key])}.`,
  }));
  return [{ ...state, alarms: keep(state.alarms), detectors: keep(state.detectors) }, notes];
}

/** Every alarm of the stream that is not normal, as it is shown: highest priority first, then the newest. */
export function openAlarms(state: StreamState, rules: StreamRules): OpenAlarm[] {
  return rules.limitSet.alarms
    .filter((rule) => rule.priority !== "record only")
    .flatMap((rule) => (state.alarms[rule.key] ? [openAlarmOf(rules.stream, rule, state.alarms[rule.key])] : []))
    .sort((a, b) => rank(a) - rank(b) || b.raisedAt - a.raisedAt);
}

const order = ["high", "medium", "low", "record only"];
function rank(alarm: OpenAlarm): number {
  return order.indexOf(alarm.priority);
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

function advanceAlarm(state: StreamState, rule: AlarmRule, event: AlarmEvent, stream: string): [StreamState, Note[]] {
  const before = state.alarms[rule.key];
  let [after, records] = advance(before, event);
  // What is for the record only asks nobody for anything.
  if (after && rule.priority === "record only") after = after.active ? { ...after, unacknowledged: false } : undefined;
  const alarms = { ...state.alarms };
  if (after) alarms[rule.key] = after;
  else delete alarms[rule.key];
  return [{ ...state, alarms }, records.map((record) => noteOf(stream, rule, record, after ?? before))];
}

function noteOf(stream: string, rule: AlarmRule, record: AlarmRecord, state: AlarmState | undefined): Note {
  const by = record.kind === "acknowledged" ? { by: record.by } : {};
  const alarm = state ? { alarm: { ...openAlarmOf(stream, rule, state), ...after(record) } } : {};
  return {
    at: record.at,
    stream,
    kind: `alarm ${record.kind}`,
    says: words(rule, record),
    ...by,
    ...alarm,
  };
}

/** The note shows the alarm as it is after the record, also when it is normal again and gone from the state. */
function after(record: AlarmRecord): Partial<OpenAlarm> {
  if (record.kind === "cleared") return { clearedAt: record.at };
  if (record.kind === "acknowledged") return { acknowledgedAt: record.at, acknowledgedBy: record.by };
  return {};
}

function words(rule: AlarmRule, record: AlarmRecord): string {
  switch (record.kind) {
    case "raised":
    case "raised again":
      return `${rule.title}: ${record.says}`;
    case "cleared":
      return `${rule.title}: back to normal.`;
    case "acknowledged":
      return `${rule.title}: acknowledged by ${record.by}${record.note ? `: ${record.note}` : ""}.`;
    case "rejected":
      return `${rule.title}: ${record.why}.`;
    default:
      return record satisfies never;
  }
}

function openAlarmOf(stream: string, rule: AlarmRule, state: AlarmState): OpenAlarm {
  const { active: _, unacknowledged: __, ...shown } = state;
  return {
    stream,
    key: rule.key,
    title: rule.title,
    priority: rule.priority,
    state: stateWord(state),
    ...shown,
    ...rule.purpose,
  };
}

/** What speaks for the alarm, at the moment it is raised. */
function evidence(rule: AlarmRule, judged: Judged, rules: StreamRules): string {
  const { watches } = rule;
  switch (watches.kind) {
    case "property": {
      const unit = rules.scorer?.compiled.properties.find(({ name }) => name === watches.property)?.unit ?? "";
      const value = judged.properties[watches.property]?.value ?? Number.NaN;
      return `${watches.property} ${short(value)}\u202f${unit}, ${isUpper(watches) ? "above" : "below"} ${watches.limit}\u202f${unit}.`;
    }
    case "unfamiliar":
      return `Q ${short(judged.ratios.q ?? Number.NaN)} × limit. ${unfamiliarWords(rules.scorer?.explained() ?? nothingExplained)}`;
    case "extrapolated":
      return `T² ${short(judged.ratios.t2 ?? Number.NaN)} × limit. ${extrapolatedWords(rules.scorer?.explained() ?? nothingExplained)}`;
    case "sparse":
      return sparseWords;
    case "unusable share":
      return `${Math.round(watches.share * 100)} % or more of the last ${watches.among} readings are unusable; the last: ${judged.unusable ?? "usable"}.`;
    case "frozen":
      return `${judged.unusable ?? "the same spectrum again"}.`;
    case "silent":
      return "No readings.";
    default:
      return watches satisfies never;
  }
}
