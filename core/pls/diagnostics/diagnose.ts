import type { Calibration } from "../calibrate.ts";
import { type ErrorStatistics, errorStatistics } from "../error-statistics.ts";
import { coefficientsOf } from "../rotations.ts";
import { type ExplainedVariance, explainedVariance } from "./explained-variance.ts";
import { influences, type SampleInfluence } from "./influence.ts";
import { type InnerRelation, innerRelation } from "./inner-relation.ts";
import { jackKnifeError } from "./jack-knife.ts";
import { vip } from "./vip.ts";

/** Everything that a person looks at to judge a calibration, as data. Channels are those after the steps. */
export interface Diagnostics {
  explained: ExplainedVariance;
  /** b of each property per unit of the property, with its jack-knife standard error */
  coefficients: { name: string; b: Float64Array; error: Float64Array }[];
  vip: Float64Array;
  /** one for each component */
  innerRelations: InnerRelation[];
  samples: SampleInfluence[];
  /** of each property: in the fit and by cross-validation at the model's number of components */
  errors: { name: string; fit: ErrorStatistics; crossValidated: ErrorStatistics }[];
}

export function diagnose(calibration: Calibration): Diagnostics {
  const { model, fit, set, crossValidation } = calibration;
  const { components } = model;
  const samples = influences(calibration);
  const b = coefficientsOf(fit.rotations, fit.yLoadings);
  return {
    explained: explainedVariance(calibration),
    coefficients: set.propertyNames.map((name, k) => {
      const full = b[k].map((value) => value * fit.yDeviation[k]);
      const without = crossValidation.kept!.coefficients.map((segment) => segment[k]);
      return { name, b: full, error: jackKnifeError(full, without) };
    }),
    vip: vip(fit.weights, fit.yLoadings, fit.scores),
    innerRelations: Array.from({ length: components }, (_, a) =>
      innerRelation(
        a + 1,
        { t: fit.scores.map((row) => row[a]), u: fit.yScores.map((row) => row[a]) },
        { t: crossValidation.scores.map((row) => row[a]), u: crossValidation.yScores.map((row) => row[a]) },
      ),
    ),
    samples,
    errors: set.propertyNames.map((name, k) => {
      const reference = set.y.map((row) => row[k]);
      const predicted = (kind: "fit" | "crossValidated") =>
        samples.map(({ error }, i) => reference[i] + error[k][kind]);
      return {
        name,
        fit: errorStatistics(predicted("fit"), reference),
        crossValidated: errorStatistics(predicted("crossValidated"), reference),
      };
    }),
  };
}
