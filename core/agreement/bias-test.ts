import { tTails } from "../limits/index.ts";
import type { Test } from "../messages/index.ts";

export interface BiasTest extends Test {
  n: number;
  /** mean of e, unit of the property */
  bias: number;
  /** √(Σ(e − bias)²/(n − 1)) */
  sep: number;
}

/**
 * Is the mean of n ≥ 2 errors other than 0?
 *
 *     t = bias √n / SEP, two-sided, n − 1 degrees of freedom
 *
 * Errors without any scatter leave nothing to measure by: p is then 0 for a bias and 1 for none.
 *
 * Source: ISO 12099 and ASTM E1655 for the bias of a validation set (from memory). Checked against R: test/reference/lab-agreement.test.ts.
 */
export function biasTest(errors: readonly number[]): BiasTest {
  const n = errors.length;
  const bias = mean(errors);
  const sep = Math.sqrt(errors.reduce((sum, e) => sum + (e - bias) ** 2, 0) / (n - 1));
  const freedom = n - 1;
  if (!(sep > 0)) return { n, bias, sep: 0, statistic: null, freedom: [freedom], p: bias === 0 ? 1 : 0 };
  const t = (bias * Math.sqrt(n)) / sep;
  return { n, bias, sep, statistic: t, freedom: [freedom], p: tTails(t, freedom) };
}

export function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}
