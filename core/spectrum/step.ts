import { type Static, Type } from "typebox";
import { MillraceError, type Mismatch, mismatchSentence } from "../errors.ts";
import type { Axis } from "./axis.ts";

const numbers = Type.Array(Type.Number());
const range = Type.Tuple([Type.Number(), Type.Number()]);
const named = <const Name extends string>(name: Name) => ({ step: Type.Literal(name) });
const strict = { additionalProperties: false };

export const AbsorbanceSchema = Type.Object(named("absorbance"), strict);
export const SavitzkyGolaySchema = Type.Object(
  {
    ...named("savitzky-golay"),
    /** points under the polynomial, odd */
    window: Type.Integer({ minimum: 3, maximum: 999 }),
    order: Type.Integer({ minimum: 0, maximum: 9 }),
    derivative: Type.Integer({ minimum: 0, maximum: 4 }),
  },
  strict,
);
export const SnvSchema = Type.Object(named("snv"), strict);
export const MscSchema = Type.Object({ ...named("msc"), reference: numbers }, strict);
export const DetrendSchema = Type.Object(
  { ...named("detrend"), order: Type.Integer({ minimum: 0, maximum: 5 }) },
  strict,
);
export const OffsetSchema = Type.Object({ ...named("offset"), range: Type.Optional(range) }, strict);
export const NormaliseSchema = Type.Object(
  { ...named("normalise"), by: Type.Union([Type.Literal("area"), Type.Literal("length")]) },
  strict,
);
export const SelectSchema = Type.Object(
  { ...named("select"), ranges: Type.Array(range, { minItems: 1, maxItems: 100 }) },
  strict,
);
export const CenterSchema = Type.Object({ ...named("center"), mean: numbers }, strict);
export const ScaleSchema = Type.Object({ ...named("scale"), deviation: numbers }, strict);

/** A preprocessing step with what it learnt from the calibration spectra. */
export const FittedStepSchema = Type.Union([
  AbsorbanceSchema,
  SavitzkyGolaySchema,
  SnvSchema,
  MscSchema,
  DetrendSchema,
  OffsetSchema,
  NormaliseSchema,
  SelectSchema,
  CenterSchema,
  ScaleSchema,
]);
export type FittedStep = Static<typeof FittedStepSchema>;
export type Fitted<Name extends FittedStep["step"]> = Extract<FittedStep, { step: Name }>;

type Learnt = "reference" | "mean" | "deviation";
type Unfitted<Step> = Step extends unknown ? Omit<Step, Learnt> : never;
/** A preprocessing step as it is asked for, before it has seen any spectrum. */
export type Step = Unfitted<FittedStep>;

/** A step that is not written as it should be, stands in a senseless place, or cannot be done on these spectra. */
export class StepError extends MillraceError {
  readonly code = "steps";
  constructor(where: string, mismatch: Mismatch) {
    super(mismatchSentence(where, mismatch), { cause: mismatch.cause });
  }
}

/** Writes the step's result for `values` (one for each point of the axis before it) into `out` (one for each point after it). */
export type Apply = (values: Float64Array, out: Float64Array) => void;

/** Spectra on one axis, with a name for each, so that an error can say which. */
export interface Spectra {
  axis: Axis;
  rows: readonly Float64Array[];
  names: readonly string[];
}
