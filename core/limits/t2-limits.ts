import { LimitError } from "./limit-error.ts";
import { betaQuantile, chiSquaredQuantile, fQuantile } from "./quantiles.ts";

/** n calibration samples, A components, confidence 1 − α (0.99: one healthy reading in a hundred lies beyond). */
export interface T2Size {
  n: number;
  components: number;
  confidence: number;
}

/**
 * Limit of T² for new readings: A(n² − 1) / (n(n − A)) · F(1 − α; A, n − A). No unit.
 *
 * It supposes scores that are normal. A calibration designed evenly over its range is not, and then the limit is far too wide: compare it
 * with the largest T² of the calibration.
 *
 * @throws LimitError when n ≤ A
 *
 * Source: Tracy, Young & Mason, J. Qual. Technol. 24 (1992) 88; MacGregor & Kourti, Control Eng. Pract. 3 (1995) 403 (from memory). Checked
 * against R: test/reference/gasoline-monitoring.test.ts; by simulation: test/core/limits/false-alarm-share.test.ts.
 */
export function t2LimitF({ n, components: A, confidence }: T2Size): number {
  if (n <= A) throw tooFew(n, A + 1);
  return ((A * (n * n - 1)) / (n * (n - A))) * fQuantile(confidence, A, n - A);
}

/**
 * Limit of T² for the calibration samples themselves: (n − 1)²/n · Beta(1 − α; A/2, (n − A − 1)/2). No unit.
 *
 * @throws LimitError when n ≤ A + 1
 *
 * Source: Tracy, Young & Mason, J. Qual. Technol. 24 (1992) 88 (from memory). Checked as {@link t2LimitF}.
 */
export function t2LimitBeta({ n, components: A, confidence }: T2Size): number {
  if (n <= A + 1) throw tooFew(n, A + 2);
  return ((n - 1) ** 2 / n) * betaQuantile(confidence, A / 2, (n - A - 1) / 2);
}

/** χ²(1 − α; A): what both limits tend to with many samples; too tight with few. */
export function t2LimitChiSquared({ components, confidence }: T2Size): number {
  return chiSquaredQuantile(confidence, components);
}

function tooFew(n: number, least: number): LimitError {
  return new LimitError("the number of calibration samples", {
    got: `${n}`,
    expected: `at least ${least} for a limit of T²`,
    todo: "Take more samples or fewer components.",
  });
}
