import { type Static, Type } from "typebox";

const orNull = <T extends Parameters<typeof Type.Union>[0][number]>(schema: T) => Type.Union([schema, Type.Null()]);
const numbers = Type.Array(Type.Number());

/** A figure with its 95 % interval; null where too few pairs give none. */
export const EstimateSchema = Type.Object({
  value: Type.Number(),
  low: orNull(Type.Number()),
  high: orNull(Type.Number()),
});
export type Estimate = Static<typeof EstimateSchema>;

/** `statistic` is null where there is no scatter to measure by. */
const TestSchema = Type.Object({
  statistic: orNull(Type.Number()),
  freedom: numbers,
  p: Type.Number(),
});
export type Test = Static<typeof TestSchema>;

/** How predictions compare with the laboratory; e = predicted − laboratory. Formulas: core/agreement/statistics.ts. */
export const AgreementStatisticsSchema = Type.Object({
  n: Type.Integer(),
  rmsep: EstimateSchema,
  bias: EstimateSchema,
  sep: EstimateSchema,
  slope: orNull(EstimateSchema),
  intercept: orNull(EstimateSchema),
  r2: orNull(EstimateSchema),
  /** is the bias other than 0? two-sided t */
  biasTest: TestSchema,
  /** is the scatter larger than the model promised? one-sided F of SEP² against RMSECV²; null without an RMSECV */
  sepTest: orNull(TestSchema),
  /** is the slope other than 1? two-sided t */
  slopeTest: orNull(TestSchema),
});
export type AgreementStatistics = Static<typeof AgreementStatisticsSchema>;

/** Charts of e in order of time, one entry a pair. */
export const ControlChartsSchema = Type.Object({
  /** how many of the first pairs set the limits */
  base: Type.Integer(),
  individuals: Type.Object({ centre: Type.Number(), low: Type.Number(), high: Type.Number() }),
  /** |e_i − e_(i−1)|; null for the first */
  movingRanges: Type.Array(orNull(Type.Number())),
  movingRangeHigh: Type.Number(),
  ewma: Type.Object({ lambda: Type.Number(), z: numbers, low: numbers, high: numbers }),
  /** which pairs give a signal, by index, and on which chart */
  signals: Type.Array(
    Type.Object({ index: Type.Integer(), chart: Type.Enum(["individuals", "moving range", "EWMA"] as const) }),
  ),
});
export type ControlCharts = Static<typeof ControlChartsSchema>;

/** A run of pairs at one level of e. */
export const StretchSchema = Type.Object({
  /** sample times of its first and last pair */
  from: Type.Number(),
  to: Type.Number(),
  n: Type.Integer(),
  bias: EstimateSchema,
  p: Type.Number(),
  biased: Type.Boolean(),
});
export type Stretch = Static<typeof StretchSchema>;

/** How far the number of pairs allows a judgement. */
export const StageSchema = Type.Object({
  stage: Type.Enum(["too few", "first judgement", "full judgement"] as const),
  n: Type.Integer(),
  /** pairs that are missing for the next stage; 0 in the last */
  missing: Type.Integer(),
  /** share of the calibrated range that the laboratory's values span, 0–1 */
  span: Type.Number(),
});
export type Stage = Static<typeof StageSchema>;

/** A pair whose error stands out from the others (Grubbs). */
export const OddPairSchema = Type.Object({ index: Type.Integer(), g: Type.Number(), critical: Type.Number() });
export type OddPair = Static<typeof OddPairSchema>;

/** One component's inner relation: what the calibration samples say of it, and where the new pairs lie. */
export const InnerPlaceSchema = Type.Object({
  component: Type.Integer(),
  /** t and u of the calibration samples, u in the unit of t */
  calibration: Type.Object({ t: numbers, u: numbers }),
  /** t and u of the pairs, and how many standard errors each lies from u = t */
  pairs: Type.Object({ index: Type.Array(Type.Integer()), t: numbers, u: numbers, apart: numbers }),
  /** beyond this many standard errors a pair is odd in this component */
  limit: Type.Number(),
  odd: Type.Array(Type.Integer()),
  /** the pairs lie beside the calibration's line, all of them: t of the mean of what all components leave, and its p */
  shift: orNull(TestSchema),
  shifted: Type.Boolean(),
  /** what all components leave bends with t: t of the quadratic term, and its p */
  bend: orNull(TestSchema),
  bent: Type.Boolean(),
});
export type InnerPlace = Static<typeof InnerPlaceSchema>;

/** Where the agreement stands, to be put into words: core/agreement/finding-words.ts. */
export const FindingSchema = Type.Object({
  property: Type.String(),
  unit: Type.String(),
  stage: StageSchema,
  /** oldest first; the last is the present one */
  stretches: Type.Array(StretchSchema),
  /** scatter about the levels of the stretches, pooled */
  scatter: orNull(Type.Number()),
  rmsecv: orNull(Type.Number()),
  scatterGrown: orNull(Type.Boolean()),
  slopeOff: Type.Boolean(),
  odd: Type.Integer(),
});
export type Finding = Static<typeof FindingSchema>;

/** GET /api/v1/streams/:id/agreement?property&from&to */
export const AgreementSchema = Type.Object({
  stream: Type.String(),
  property: Type.String(),
  unit: Type.String(),
  model: orNull(Type.Object({ id: Type.String(), name: Type.String() })),
  /** the pairs that count, in order of sample time: every index here is one of these */
  pairs: Type.Object({ time: numbers, predicted: numbers, laboratory: numbers }),
  /** pairs kept apart, results withdrawn, pairs of another model: by why */
  apart: Type.Array(Type.Object({ why: Type.String(), count: Type.Integer() })),
  finding: FindingSchema,
  /** null with fewer than three pairs */
  statistics: orNull(AgreementStatisticsSchema),
  /** null with too few pairs to set limits */
  charts: orNull(ControlChartsSchema),
  odd: orNull(OddPairSchema),
  inner: Type.Array(InnerPlaceSchema),
  /** how pairs are made, for the words under the charts */
  pairing: Type.Object({ lagMs: Type.Number(), windowMs: Type.Number() }),
});
export type Agreement = Static<typeof AgreementSchema>;
