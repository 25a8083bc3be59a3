import fCdf from "@stdlib/stats-base-dists-f-cdf";
import tCdf from "@stdlib/stats-base-dists-t-cdf";

// Shares of a distribution beyond a value: the p of a test. Checked against R: test/reference/lab-agreement.test.ts.

/** P(|T| ≥ |t|), Student's t. */
export function tTails(t: number, freedom: number): number {
  return 2 * tCdf(-Math.abs(t), freedom);
}

/** P(F ≥ f): by the other end of 1/F, which keeps small shares exact. */
export function fUpperTail(f: number, numerator: number, denominator: number): number {
  return f > 0 ? fCdf(1 / f, denominator, numerator) : 1;
}
