import {
  freshState,
  type Judgement,
  judge,
  type Note,
  Scorer,
  type StreamRules,
  type StreamState,
} from "../../../core/judging/index.ts";
import type { AlarmRule } from "../../../core/limit-set/index.ts";
import { statisticLimits } from "../../../core/limits/index.ts";
import type { LabResult } from "../../../core/messages/index.ts";
import { calibrate, compileModel, interleaved, seededRandom } from "../../../core/pls/index.ts";
import { axisFromSpec, parseSteps } from "../../../core/spectrum/index.ts";

const axisSpec = { unit: "nm" as const, start: 1000, step: 10, count: 41 };
const axis = axisFromSpec(axisSpec);
const band = (middle: number, width: number) =>
  Array.from(axis.points, (x) => Math.exp(-(((x - middle) / width) ** 2)));
const bands = [band(1100, 40), band(1250, 60)];
/** nothing in the calibration absorbs here */
const foreign = band(1350, 15);

/** A spectrum of the small stream: 0.2–0.8 of each ingredient was calibrated; `foreign` is something that never was. */
export function spectrum(
  random: () => number,
  amounts: { a?: number; b?: number; foreign?: number } = {},
): Float64Array {
  const { a = 0.5, b = 0.5, foreign: strange = 0 } = amounts;
  return Float64Array.from(axis.points, (_, j) => {
    return a * bands[0][j] + b * bands[1][j] + strange * foreign[j] + 0.002 * (random() + random() - 1);
  });
}

const compiled = (() => {
  const random = seededRandom(7);
  const amounts = Array.from({ length: 40 }, () => [0.2 + 0.6 * random(), 0.2 + 0.6 * random()]);
  const rows = amounts.map(([a, b]) => spectrum(random, { a, b }));
  const set = {
    spectra: { axis, rows, names: rows.map((_, i) => `s${i}`) },
    y: amounts.map(([a]) => Float64Array.of(a)),
    propertyNames: ["a"],
  };
  const { model } = calibrate(set, {
    name: "small",
    created: "2026-05-01T00:00:00Z",
    steps: parseSteps("center"),
    components: 2,
    segments: interleaved(rows.length, 10),
    validation: "interleaved",
  });
  return compileModel(model);
})();

const periodMs = 10_000;

/** The rules of a stream with two ingredients, a reading every 10 s, and these alarms. */
export function smallRules(alarms: AlarmRule[]): StreamRules {
  const { t2, q, nearest } = statisticLimits(compiled.model);
  return {
    stream: "small",
    periodMs,
    gapMs: 5 * periodMs,
    lateGraceMs: 3 * periodMs,
    futureToleranceMs: 5000,
    validity: { frozenAfter: 3 },
    limitSet: {
      format: "millrace-limit-set",
      formatVersion: 1,
      stream: "small",
      version: 1,
      model: compiled.id,
      statistics: {
        t2: { method: "f", limit: t2 },
        q: { method: "box", limit: q },
        nearest: { method: "largest", limit: nearest },
      },
      alarms,
      author: "A. Thorne",
      reason: "a test",
      time: 0,
    },
    scorer: new Scorer(compiled),
  };
}

const purpose = { cause: "c", consequence: "c", response: "r", timeToRespondMinutes: 10 };

/** An alarm on what the calibration never saw: three in a row raise it, three end it. */
export function unfamiliarAlarm(more: Partial<AlarmRule> = {}): AlarmRule {
  return {
    key: "unfamiliar",
    title: "Unfamiliar",
    watches: { kind: "unfamiliar", deadband: 0.05 },
    onDelay: { readings: 3 },
    offDelay: { readings: 3 },
    priority: "medium",
    untrusted: "evaluate",
    purpose,
    ...more,
  };
}

/** An alarm on the bias of `a` against the laboratory, over three pairs. */
export function labBiasAlarm(more: Partial<AlarmRule> = {}): AlarmRule {
  return unfamiliarAlarm({
    key: "lab-bias",
    title: "Biased against the laboratory",
    watches: { kind: "lab bias", property: "a", bias: 0.05, deadband: 0.02, pairs: 3, confidence: 0.95 },
    onDelay: { readings: 1 },
    offDelay: { readings: 1 },
    ...more,
  });
}

/** The laboratory's value of `a` beside a prediction of 0.5. */
export function labResult(time: number, value: number, more: Partial<LabResult> = {}): LabResult {
  return {
    stream: "small",
    property: "a",
    time,
    method: "titration",
    sample: "",
    value,
    unit: "",
    by: "R. Quill",
    receivedAt: time,
    origin: "message",
    version: 1,
    withdrawn: false,
    changes: [],
    pair: {
      predicted: 0.5,
      from: time,
      to: time,
      readings: 1,
      interpolated: false,
      verdict: "inside",
      apart: null,
      says: "",
      model: compiled.id,
      limitSet: 1,
      scores: null,
    },
    ...more,
  };
}

export type Judged = Extract<Judgement, { kind: "judged" }>;

/** A stream that is fed reading by reading: keeps its state, and all notes in their order. */
export class SmallStream {
  state: StreamState = freshState;
  readonly notes: Note[] = [];
  readonly rules: StreamRules;
  time = Date.UTC(2026, 5, 1);
  readonly random: () => number;
  #sequence = 0;

  constructor(rules: StreamRules, seed = 1) {
    this.rules = rules;
    this.random = seededRandom(seed);
  }

  /** The next reading, one period (or `afterMs`) after the last. */
  feed(amounts: Parameters<typeof spectrum>[1] = {}, afterMs = periodMs): Judged {
    this.time += afterMs;
    const reading = { time: this.time, sequence: this.#sequence++, values: spectrum(this.random, amounts) };
    const [state, judgement] = judge(this.state, { reading, receivedAt: this.time, known: false }, this.rules);
    if (judgement.kind !== "judged") throw new Error(JSON.stringify(judgement));
    this.state = state;
    this.notes.push(...judgement.notes);
    return judgement;
  }

  kinds(): string[] {
    return this.notes.map(({ kind }) => kind);
  }
}
