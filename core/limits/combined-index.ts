import { thetasOf } from "./jackson-mudholkar.ts";
import { chiSquaredQuantile } from "./quantiles.ts";

/** φ = T²/τ² + Q/δ²: one number to rank readings by. It hides which of the two it was, so it is never the only thing shown. */
export function combinedIndex({ t2, q }: { t2: number; q: number }, limits: { t2: number; q: number }): number {
  return t2 / limits.t2 + q / limits.q;
}

/**
 * Limit of the combined index: g · χ²(1 − α; h) with
 *
 *     g = (A/τ⁴ + θ₂/δ⁴) / (A/τ² + θ₁/δ²)     h = (A/τ² + θ₁/δ²)² / (A/τ⁴ + θ₂/δ⁴)
 *
 * τ² and δ² are the limits of T² and Q that the index is made with. No unit.
 *
 * @throws LimitError when there is no residual
 *
 * Source: Yue & Qin, Ind. Eng. Chem. Res. 40 (2001) 4403 (from memory). Checked against R: test/reference/gasoline-monitoring.test.ts.
 */
export function combinedLimit(
  eigenvalues: readonly number[],
  components: number,
  limits: { t2: number; q: number },
  confidence: number,
): number {
  const { theta1, theta2 } = thetasOf(eigenvalues);
  const first = components / limits.t2 + theta1 / limits.q;
  const second = components / limits.t2 ** 2 + theta2 / limits.q ** 2;
  return (second / first) * chiSquaredQuantile(confidence, first ** 2 / second);
}
