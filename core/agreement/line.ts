import { mean } from "./bias-test.ts";

/** y = intercept + slope · x by least squares, with standard errors. */
export interface Line {
  slope: number;
  intercept: number;
  slopeError: number;
  interceptError: number;
  /** n − 2 */
  freedom: number;
  /** squared correlation of x and y */
  r2: number;
}

/** Through n ≥ 3 points; undefined when x or y does not vary. Source: any text of statistics. Checked against R: test/reference/lab-agreement.test.ts. */
export function lineThrough(x: readonly number[], y: readonly number[]): Line | undefined {
  const n = x.length;
  const [mx, my] = [mean(x), mean(y)];
  let [xx, xy, yy] = [0, 0, 0];
  for (let i = 0; i < n; i++) {
    xx += (x[i] - mx) ** 2;
    xy += (x[i] - mx) * (y[i] - my);
    yy += (y[i] - my) ** 2;
  }
  if (n < 3 || !(xx > 0) || !(yy > 0)) return undefined;
  const slope = xy / xx;
  const intercept = my - slope * mx;
  const freedom = n - 2;
  const left = x.reduce((sum, value, i) => sum + (y[i] - intercept - slope * value) ** 2, 0) / freedom;
  return {
    slope,
    intercept,
    slopeError: Math.sqrt(left / xx),
    interceptError: Math.sqrt(left * (1 / n + mx ** 2 / xx)),
    freedom,
    r2: xy ** 2 / (xx * yy),
  };
}
