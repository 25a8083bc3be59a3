import type { Calibration } from "../calibrate.ts";

/** Share of the variance that the components explain, 0–1, cumulative, from 1 component. */
export interface ExplainedVariance {
  x: number[];
  /** of each property: 1 − Σe²/Σ(y − ȳ)², over the calibration samples */
  y: { name: string; fit: number[] }[];
}

/** X: Σ (pᵀp)(tᵀt) over the components, against the sum of squares of the centred spectra. */
export function explainedVariance({ fit, set }: Calibration): ExplainedVariance {
  const { loadings, scores, yLoadings, yMean, yDeviation, residuals } = fit;
  const perComponent = loadings.map((p, a) => squares(p) * scores.reduce((sum, row) => sum + row[a] ** 2, 0));
  const total =
    perComponent.reduce((sum, part) => sum + part, 0) + residuals.reduce((sum, row) => sum + squares(row), 0);
  return {
    x: cumulative(perComponent.map((part) => part / total)),
    y: set.propertyNames.map((name, k) => {
      const variance = set.y.reduce((sum, row) => sum + (row[k] - yMean[k]) ** 2, 0);
      // scores are orthogonal: what each component explains adds up
      return {
        name,
        fit: cumulative(
          yLoadings.map((q, a) => {
            const tt = scores.reduce((sum, row) => sum + row[a] ** 2, 0);
            return ((q[k] * yDeviation[k]) ** 2 * tt) / variance;
          }),
        ),
      };
    }),
  };
}

function cumulative(parts: readonly number[]): number[] {
  let sum = 0;
  return parts.map((part) => {
    sum += part;
    return sum;
  });
}

function squares(values: Float64Array): number {
  return values.reduce((sum, value) => sum + value * value, 0);
}
