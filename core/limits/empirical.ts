import { LimitError } from "./limit-error.ts";

/**
 * The value below which a share p of the values seen lies: type 7, as numpy and R do by default. With sorted v₁ … v_n the position is
 * 1 + (n − 1) p, between two values on a straight line. A 99 % point wants about a thousand values.
 *
 * Source: Hyndman & Fan, Am. Stat. 50 (1996) 361 (from memory). Checked against R: test/reference/gasoline-monitoring.test.ts.
 *
 * @throws LimitError when there are no values or p is not within 0 … 1
 */
export function empiricalQuantile(values: ArrayLike<number>, p: number): number {
  if (values.length === 0 || !(p >= 0 && p <= 1)) {
    throw new LimitError("the empirical quantile", {
      got: `${values.length} values at ${p}`,
      expected: "at least one value, and a share between 0 and 1",
      todo: "Give more values or correct the confidence.",
    });
  }
  const sorted = Float64Array.from(values).sort();
  const position = (sorted.length - 1) * p;
  const below = Math.floor(position);
  const above = Math.min(below + 1, sorted.length - 1);
  return sorted[below] + (position - below) * (sorted[above] - sorted[below]);
}
