import { type Static, Type } from "typebox";

const strict = { additionalProperties: false };
const confidence = Type.Number({ exclusiveMinimum: 0, exclusiveMaximum: 1 });
/** A number that a person set, or that was learnt from a reference period. */
const GivenSchema = Type.Object(
  {
    method: Type.Union([Type.Literal("fixed"), Type.Literal("learnt")]),
    number: Type.Number({ exclusiveMinimum: 0 }),
  },
  strict,
);
const T2MethodSchema = Type.Union([Type.Literal("f"), Type.Literal("beta"), Type.Literal("chi-squared")]);
const QMethodSchema = Type.Union([
  Type.Literal("box-moments"),
  Type.Literal("box"),
  Type.Literal("jackson-mudholkar"),
  Type.Literal("empirical"),
]);

/** How the limit of each statistic is worked out. */
export const StatisticChoiceSchema = Type.Object(
  {
    /** f: for new readings · beta: for the calibration samples · chi-squared: for many samples · largest: the calibration's largest T² */
    t2: Type.Union([
      Type.Object({ method: T2MethodSchema, confidence }, strict),
      Type.Object({ method: Type.Literal("largest") }, strict),
      GivenSchema,
    ]),
    /** from the residuals of cross-validation, or of the fit, which are too small for new readings */
    q: Type.Union([
      Type.Object(
        {
          method: QMethodSchema,
          residuals: Type.Union([Type.Literal("cross-validated"), Type.Literal("fit")]),
          confidence,
        },
        strict,
      ),
      GivenSchema,
    ]),
    /** largest: the largest distance from a calibration sample to its nearest fellow */
    nearest: Type.Union([Type.Object({ method: Type.Literal("largest") }, strict), GivenSchema]),
  },
  strict,
);
export type StatisticChoice = Static<typeof StatisticChoiceSchema>;

/**
 * F limit of T² for new readings, Box's limit of Q by the moments of the cross-validated residuals, the calibration's largest gap.
 *
 * Why cross-validated: residuals of the fit are smaller than those of new readings of the same kind; a nominal 1 % from them flagged up to
 * 28 % (test/core/limits/false-alarm-share.test.ts shows both).
 */
export function defaultStatisticChoice(confidence = 0.99): StatisticChoice {
  return {
    t2: { method: "f", confidence },
    q: { method: "box-moments", residuals: "cross-validated", confidence },
    nearest: { method: "largest" },
  };
}
