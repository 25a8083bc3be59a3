import { type LimitSet, mostAmong } from "../limit-set/index.ts";
import type { Excursion, Judged, Prediction, Reading, Verdict } from "../messages/index.ts";
import { AxisError } from "../spectrum/index.ts";
import { advanceAll } from "./advance-alarm.ts";
import { runAlarms, silenceUntil } from "./alarms.ts";
import { endExcursions, runExcursions } from "./excursions.ts";
import { closeGap, type Note } from "./notes.ts";
import { processTimeAt } from "./process-state.ts";
import type { Scorer } from "./scorer.ts";
import { followNumbering } from "./sequence-gap.ts";
import type { StreamState } from "./state.ts";
import { fingerprint, type Invalid, invalidity, type ValidityRules } from "./validity.ts";

/** All that judging is told of one stream besides its readings. */
export interface StreamRules {
  stream: string;
  /** expected time between two readings, and from which time on between two readings there is a gap; ms */
  periodMs: number;
  gapMs: number;
  /** a reading that comes after a newer one is still taken when it is no older than this, ms */
  lateGraceMs: number;
  /** a reading may be ahead of our clock by this much, ms */
  futureToleranceMs: number;
  validity: ValidityRules;
  limitSet: LimitSet;
  /** how laboratory results are matched to readings; absent: {@link defaultLaboratory} */
  laboratory?: LaboratoryRules;
  /** undefined while the stream has no usable model */
  scorer: Scorer | undefined;
  /** why the stream's model file cannot be used, and what to do */
  modelTrouble?: string;
}

export interface LaboratoryRules {
  /** sample time − lag is the time of the readings that saw the same material, ms */
  lagMs: number;
  /** readings within it are averaged, ms */
  windowMs: number;
  /** by property, where the plant says it: results outside are refused */
  plausible: Record<string, readonly [number, number]>;
}

/** One minute: drawing a sample takes about so long. */
export const defaultLaboratory: LaboratoryRules = { lagMs: 0, windowMs: 60_000, plausible: {} };

export interface Arrival {
  reading: Reading;
  /** wall clock, epoch ms; for recorded history the reading's own time */
  receivedAt: number;
  /** a reading of the same (stream, time, sequence) is on record */
  known: boolean;
}

export type RefusalReason =
  | Invalid["reason"]
  | "malformed"
  | "too large"
  | "unknown stream"
  | "lab result"
  | "wrong axis"
  | "no model"
  | "future"
  | "late";

export type Judgement =
  | { kind: "repeat" }
  | { kind: "refused"; reason: RefusalReason; says: string }
  | {
      kind: "judged";
      judged: Judged;
      /** came after a newer one: on record, but no detector saw it */
      late: boolean;
      /** time of the reading before the gap that this one ends */
      gapFrom: number | null;
      /** an unusable reading is counted among the refusals, too */
      refusal?: { reason: RefusalReason; says: string };
      notes: Note[];
      excursions: Excursion[];
    };

/**
 * Judges one reading: valid? → model's axis → score → verdict → detectors → lifecycle. Pure but for the scorer's own room: `state` is not
 * changed, and the same arrivals under the same rules always give the same judgements. Live readings, loads of history and rehearsals all
 * come through here.
 */
export function judge(state: StreamState, arrival: Arrival, rules: StreamRules): [StreamState, Judgement] {
  const { reading, receivedAt } = arrival;
  if (arrival.known) return [state, { kind: "repeat" }];
  const ahead = reading.time - receivedAt;
  if (ahead > rules.futureToleranceMs) {
    const says = `its time is ${seconds(ahead)} ahead of this clock; at most ${seconds(rules.futureToleranceMs)} is taken. Set the analyzer's clock.`;
    return [state, { kind: "refused", reason: "future", says }];
  }
  const newest = state.latest?.time ?? Number.NEGATIVE_INFINITY;
  const late = reading.time <= newest;
  if (newest - reading.time > rules.lateGraceMs) {
    const says = `it is ${seconds(newest - reading.time)} older than the newest reading; at most ${seconds(rules.lateGraceMs)} is taken. Recorded history comes in by 'load'.`;
    return [state, { kind: "refused", reason: "late", says }];
  }

  const print = fingerprint(reading.values);
  const same = !late && print === state.fingerprint ? state.same + 1 : 1;
  const invalid = invalidityOf(reading, same, rules);
  const judged =
    invalid || !rules.scorer
      ? unusable(reading, invalid ?? { reason: "no model", says: "no model" }, rules)
      : scored(reading, rules.scorer, rules);
  const refusal = invalid ? { refusal: invalid } : {};
  if (late) {
    return [
      state,
      {
        kind: "judged",
        judged,
        late,
        gapFrom: null,
        ...refusal,
        notes: [],
        excursions: [],
      },
    ];
  }

  const gapFrom = state.latest && reading.time - newest > rules.gapMs ? newest : null;
  const [before, gapNotes, gapExcursions] = gapFrom === null ? untouched(state) : closeGap(state, rules);
  const frozen = invalid?.reason === "frozen";
  const [numbering, missing] = followNumbering(state.numbering, reading.sequence);
  const seen = remember({ ...before, numbering }, { judged, receivedAt, print, same, frozen });
  const [alarmed, alarmNotes] = runAlarms(seen, judged, { frozen }, rules);
  const [next, excursionNotes, excursions] = runExcursions(alarmed, judged, rules);
  const judgement: Judgement = {
    kind: "judged",
    judged,
    late,
    gapFrom,
    ...refusal,
    notes: [...gapNotes, ...missingNotes(missing, judged), ...alarmNotes, ...excursionNotes],
    excursions: [...gapExcursions, ...excursions],
  };
  return [next, judgement];
}

/**
 * The wall clock moves on without a reading: raises "silent", ends shelves whose time has run out, suppressions and excursions that nobody
 * watches any more. The same `state` when nothing has changed. Pure.
 */
export function tick(
  state: StreamState,
  now: number,
  listeningSince: number,
  rules: StreamRules,
): [StreamState, Note[], Excursion[]] {
  const lastHeard = Math.max(state.receivedAt ?? Number.NEGATIVE_INFINITY, listeningSince);
  const [clocked, clockNotes] = advanceAll(state, { kind: "wall clock", at: now }, rules);
  const processTime = processTimeAt(clocked, now);
  const [timed, timeNotes] = advanceAll(clocked, { kind: "process time", at: processTime }, rules);
  const [silent, silentNotes] = silenceUntil(timed, now, lastHeard, rules);
  const notes = [...clockNotes, ...timeNotes, ...silentNotes];
  if (now - lastHeard <= rules.gapMs || Object.keys(silent.excursions).length === 0) return [silent, notes, []];
  const [next, moreNotes, excursions] = endExcursions(silent, "gap", rules);
  return [next, [...notes, ...moreNotes], excursions];
}

function missingNotes(missing: number, { stream, time, sequence }: Judged): Note[] {
  if (missing === 0) return [];
  const [first, last] = [sequence - missing, sequence - 1];
  const what = missing === 1 ? `reading ${first} is missing` : `readings ${first} to ${last} are missing (${missing})`;
  const says = `${what}: lost on the way here, or still to come. Does the broker queue enough for an engine that is away?`;
  return [{ at: time, stream, kind: "sequence gap", says }];
}

function untouched(state: StreamState): [StreamState, Note[], Excursion[]] {
  return [state, [], []];
}

function invalidityOf(
  reading: Reading,
  same: number,
  rules: StreamRules,
): { reason: RefusalReason; says: string } | undefined {
  const { scorer } = rules;
  if (!scorer) {
    return {
      reason: "no model",
      says: rules.modelTrouble ?? "the stream has no model",
    };
  }
  try {
    return invalidity(reading.values, scorer.expected(reading.axis), reading.quality, same, rules.validity);
  } catch (error) {
    if (error instanceof AxisError) return { reason: "wrong axis", says: error.message };
    throw error;
  }
}

function unusable(
  reading: Reading,
  { reason, says }: { reason: RefusalReason; says: string },
  rules: StreamRules,
): Judged {
  const names = rules.scorer?.compiled.properties.map((property) => property.name) ?? [];
  return {
    stream: rules.stream,
    time: reading.time,
    sequence: reading.sequence,
    properties: Object.fromEntries(names.map((name) => [name, { value: null, uncertainty: null }])),
    t2: null,
    q: null,
    leverage: null,
    nearest: null,
    ratios: { t2: null, q: null, nearest: null },
    verdict: ["unusable"],
    unusable: says,
    unusableReason: reason,
    model: rules.scorer?.compiled.id ?? null,
    limitSet: rules.limitSet.version,
  };
}

function scored(reading: Reading, scorer: Scorer, rules: StreamRules): Judged {
  const { compiled } = scorer;
  const score = scorer.run(reading.values, reading.axis);
  const { t2, q, nearest } = rules.limitSet.statistics;
  const ratios = {
    t2: score.t2 / t2.limit,
    q: score.q / q.limit,
    nearest: score.nearest / nearest.limit,
  };
  const verdict = verdictOf(ratios);
  const inside = verdict[0] === "inside";
  const properties: Record<string, Prediction> = {};
  compiled.properties.forEach((property, i) => {
    // For a reading outside the model no interval is defensible (field practice, ASTM D6122): none is given.
    properties[property.name] = {
      value: score.values[i],
      uncertainty: inside ? score.uncertainties[i] : null,
    };
  });
  return {
    stream: rules.stream,
    time: reading.time,
    sequence: reading.sequence,
    properties,
    t2: score.t2,
    q: score.q,
    leverage: score.leverage,
    nearest: score.nearest,
    ratios,
    verdict,
    model: compiled.id,
    limitSet: rules.limitSet.version,
  };
}

/** All verdicts that hold, worst first. ASTM D8340-22 §5.4.2 asks for these three tests. */
export function verdictOf(ratios: { t2: number; q: number; nearest: number }): Verdict[] {
  const held: Verdict[] = [];
  if (ratios.q > 1) held.push("unfamiliar");
  if (ratios.t2 > 1) held.push("extrapolated");
  // Beyond T² no calibration sample is near anyway: "sparse" is kept for gaps within the calibration.
  if (ratios.nearest > 1 && ratios.t2 <= 1) held.push("sparse");
  return held.length > 0 ? held : ["inside"];
}

function remember(
  state: StreamState,
  seen: { judged: Judged; receivedAt: number; print: string; same: number; frozen: boolean },
): StreamState {
  const { judged, receivedAt, print, same, frozen } = seen;
  const verdict = judged.verdict[0];
  return {
    ...state,
    latest: judged,
    receivedAt,
    lastInside: verdict === "inside" ? judged : state.lastInside,
    verdict,
    verdictSince: verdict === state.verdict ? state.verdictSince : judged.time,
    fingerprint: print,
    same,
    // A frozen analyzer has an alarm of its own: one cause, one alarm.
    unusable: [...state.unusable, verdict === "unusable" && !frozen ? 1 : 0].slice(-mostAmong),
  };
}

function seconds(ms: number): string {
  return ms < 10_000 ? `${(ms / 1000).toFixed(1)} s` : `${Math.round(ms / 1000)} s`;
}
