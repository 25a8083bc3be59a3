import { thetasOf } from "./jackson-mudholkar.ts";
import { LimitError } from "./limit-error.ts";
import { chiSquaredQuantile } from "./quantiles.ts";

/**
 * Limit of Q as g · χ²(1 − α; h), with g = θ₂/θ₁ and h = θ₁²/θ₂ from the residual eigenvalues.
 *
 * @param confidence 1 − α
 * @throws LimitError when there is no residual
 *
 * Source: Box, Ann. Math. Stat. 25 (1954) 290 (from memory). Checked against R: test/reference/gasoline-monitoring.test.ts.
 */
export function boxLimit(eigenvalues: readonly number[], confidence: number): number {
  const { theta1, theta2 } = thetasOf(eigenvalues);
  return (theta2 / theta1) * chiSquaredQuantile(confidence, theta1 ** 2 / theta2);
}

/**
 * The same with g = v/(2m) and h = 2m²/v, m the mean and v the variance (divisor n − 1) of Q values that were seen.
 *
 * @throws LimitError when the values do not vary
 *
 * Source: Nomikos & MacGregor, Technometrics 37 (1995) 41 (from memory). Checked as {@link boxLimit}.
 */
export function boxMomentsLimit(q: readonly number[], confidence: number): number {
  const n = q.length;
  const mean = q.reduce((sum, value) => sum + value, 0) / n;
  const variance = q.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (n - 1);
  if (!(mean > 0 && variance > 0)) {
    throw new LimitError("the Q values", {
      got: `${n} with mean ${mean} and variance ${variance}`,
      expected: "at least two that differ",
      todo: "Give Q of more samples.",
    });
  }
  return (variance / (2 * mean)) * chiSquaredQuantile(confidence, (2 * mean ** 2) / variance);
}
