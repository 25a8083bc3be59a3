import { LimitError } from "./limit-error.ts";
import { normalQuantile } from "./quantiles.ts";

/** θ_k = Σ λᵏ over the eigenvalues of the residual covariance, k = 1, 2, 3. */
export interface Thetas {
  theta1: number;
  theta2: number;
  theta3: number;
}

/** @throws LimitError when there is no residual at all: a limit of zero would flag every reading */
export function thetasOf(eigenvalues: readonly number[]): Thetas {
  const power = (k: number) => eigenvalues.reduce((sum, value) => sum + value ** k, 0);
  const thetas = { theta1: power(1), theta2: power(2), theta3: power(3) };
  if (thetas.theta1 > 0 && thetas.theta2 > 0) return thetas;
  throw new LimitError("the residual of the calibration", {
    got: "zero",
    expected: "some residual to make a limit of Q from",
    todo: "Take fewer components than the samples can explain without rest.",
  });
}

/**
 * Limit of Q = ‖e‖² from the residual eigenvalues. Unit: that of the stepped spectrum, squared.
 *
 *     h₀ = 1 − 2θ₁θ₃ / (3θ₂²)     limit = θ₁ [1 + z h₀ √(2θ₂)/θ₁ + θ₂h₀(h₀ − 1)/θ₁²]^(1/h₀)
 *
 * z is the upper 1 − α point of the normal distribution. Written with z h₀ the deviate has the sign that Jackson & Mudholkar ask for when
 * h₀ is negative; through h₀ = 0 the limit is smooth, and there it is taken as the exponential that it tends to.
 *
 * @param confidence 1 − α
 * @throws LimitError when there is no residual, or the bracket is not positive (the approximation fails: use Box's)
 *
 * Source: Jackson & Mudholkar, Technometrics 21 (1979) 341 (from memory). Checked against R: test/reference/gasoline-monitoring.test.ts.
 */
export function jacksonMudholkarLimit(eigenvalues: readonly number[], confidence: number): number {
  const { theta1, theta2, theta3 } = thetasOf(eigenvalues);
  const h0 = 1 - (2 * theta1 * theta3) / (3 * theta2 ** 2);
  const z = normalQuantile(confidence);
  const slope = (z * Math.sqrt(2 * theta2)) / theta1 + (theta2 * (h0 - 1)) / theta1 ** 2;
  if (Math.abs(h0) < 1e-9) return theta1 * Math.exp(slope);
  const bracket = h0 * slope;
  if (bracket > -1) return theta1 * Math.exp(Math.log1p(bracket) / h0);
  throw new LimitError("the limit of Q after Jackson & Mudholkar", {
    got: `undefined for these residuals (h₀ = ${h0.toPrecision(3)})`,
    expected: "a positive bracket",
    todo: "Use the method box.",
  });
}
