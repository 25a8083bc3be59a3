import { labBias, labBiasCondition, pWords, type RememberedPair } from "../agreement/index.ts";
import { type AlarmEvent, detect, restingDetector } from "../alarms/index.ts";
import type { AlarmRule, LabBiasWatch } from "../limit-set/index.ts";
import type { LabResult } from "../messages/index.ts";
import { advanceAlarm } from "./advance-alarm.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import type { StreamState } from "./state.ts";
import { short } from "./words.ts";

/** Pairs of one property that are kept for the alarm; a rule looks at 40 at most. */
const mostRemembered = 60;

/**
 * A laboratory result, new or changed, through the lab-bias alarms of its stream. A pair that counts is remembered in its place by sample
 * time; a newest one, and any correction or withdrawal, is judged at once. One that came after a newer pair is remembered only, as a late
 * reading is. Pure.
 */
export function hearLaboratory(state: StreamState, result: LabResult, rules: StreamRules): [StreamState, Note[]] {
  const { property } = result;
  const before = state.laboratory[property] ?? [];
  const pairs = withResult(before, result);
  if (pairs === before) return [state, []];
  const next = { ...state, laboratory: { ...state.laboratory, [property]: pairs } };
  const newest = pairs.at(-1);
  const late = result.version === 1 && newest !== undefined && newest.time > result.time;
  return late || !newest ? [next, []] : judgeBias(next, property, newest.time, rules);
}

/** The same list when the result neither counts nor ever did. */
function withResult(pairs: readonly RememberedPair[], result: LabResult): RememberedPair[] {
  const { time, method, sample, value, pair, withdrawn } = result;
  const others = pairs.filter((known) => known.time !== time || known.method !== method || known.sample !== sample);
  if (withdrawn || pair.apart !== null || pair.predicted === null || pair.model === null) {
    return others.length === pairs.length ? (pairs as RememberedPair[]) : others;
  }
  const own = { time, method, sample, predicted: pair.predicted, laboratory: value, model: pair.model };
  return [...others, own].sort((a, b) => a.time - b.time).slice(-mostRemembered);
}

/** `state` with the pairs that came before its own: what recorded history ends with goes on in the live record. Pure. */
export function withEarlierPairs(state: StreamState, earlier: StreamState): StreamState {
  const laboratory = { ...state.laboratory };
  for (const [property, pairs] of Object.entries(earlier.laboratory)) {
    const own = laboratory[property] ?? [];
    const before = pairs.filter(({ time }) => time < (own[0]?.time ?? Number.POSITIVE_INFINITY));
    laboratory[property] = [...before, ...own].slice(-mostRemembered);
  }
  return { ...state, laboratory };
}

function judgeBias(state: StreamState, property: string, at: number, rules: StreamRules): [StreamState, Note[]] {
  let next = state;
  const notes: Note[] = [];
  for (const rule of rules.limitSet.alarms) {
    const { watches } = rule;
    if (watches.kind !== "lab bias" || watches.property !== property) continue;
    const step = judgeOne(next, rule, watches, at, rules);
    next = step.state;
    notes.push(...step.notes);
  }
  return [next, notes];
}

function judgeOne(
  state: StreamState,
  rule: AlarmRule,
  watches: LabBiasWatch,
  at: number,
  rules: StreamRules,
): { state: StreamState; notes: Note[] } {
  const found = labBias(state.laboratory[watches.property] ?? [], watches.pairs);
  const condition = labBiasCondition(found, watches);
  const [detector, signal] = detect(state.detectors[rule.key] ?? restingDetector, condition, at, rule);
  const next = { ...state, detectors: { ...state.detectors, [rule.key]: detector } };
  if (signal.kind === "none") return { state: next, notes: [] };
  // The sample was drawn hours ago; the alarm is raised, or clears, at the process time of today.
  const now = Math.max(at, state.latest?.time ?? at);
  const event: AlarmEvent =
    signal.kind === "clear"
      ? { kind: "clear", at: now }
      : {
          kind: "raise",
          at: now,
          since: Math.min(found?.since ?? signal.since, signal.since),
          says: biasWords(watches.property, found, rules),
          limitSet: rules.limitSet.version,
        };
  return advanceAlarm(next, rule, event, rules);
}

function biasWords(property: string, found: ReturnType<typeof labBias>, { scorer }: StreamRules): string {
  if (!found) return `${property}: biased against the laboratory.`;
  const unit = scorer?.compiled.properties.find(({ name }) => name === property)?.unit ?? "";
  const side = found.bias > 0 ? "above" : "below";
  return `${property}: the predictions lie ${short(Math.abs(found.bias))}\u202f${unit} ${side} the laboratory over the last ${found.n} pairs (p ${pWords(found.p)}). Either may be off.`;
}
