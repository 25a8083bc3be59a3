import { Matrix, solve } from "ml-matrix";
import { tQuantile } from "../../limits/index.ts";

/** The relation between t and u of one component, over the calibration samples. */
export interface InnerRelation {
  component: number;
  /** correlation of t and u in the fit: high by construction, as t is chosen for it */
  correlation: number;
  /** the same for held-out samples: here chance has no part */
  crossValidated: number;
  /** below this a correlation is no sign of a relation (one-sided 1 % point for n samples) */
  leastCorrelation: number;
  /** held-out samples show no relation: the component is not worth taking */
  empty: boolean;
  /** t statistic of the quadratic term in u = c₀ + c₁t + c₂t², and its two-sided 1 % point */
  curvature: number;
  curvatureLimit: number;
  /** the relation bends: the property is not linear in the spectra as they are preprocessed */
  bent: boolean;
}

/**
 * @param fitted t and u of the calibration samples in the fit: n each
 * @param heldOut the same by cross-validation
 *
 * Source: Geladi & Kowalski, Anal. Chim. Acta 185 (1986) 1, for the inner relation; the tests are those of a correlation and of a regression
 * coefficient in any text of statistics (from memory).
 */
export function innerRelation(component: number, fitted: Pairs, heldOut: Pairs): InnerRelation {
  const n = fitted.t.length;
  const point = tQuantile(0.99, n - 2);
  const leastCorrelation = point / Math.sqrt(n - 2 + point ** 2);
  const crossValidated = correlation(heldOut);
  const curvature = quadraticTerm(fitted);
  const curvatureLimit = tQuantile(0.995, n - 3);
  return {
    component,
    correlation: correlation(fitted),
    crossValidated,
    leastCorrelation,
    empty: !(crossValidated > leastCorrelation),
    curvature,
    curvatureLimit,
    bent: Math.abs(curvature) > curvatureLimit,
  };
}

export interface Pairs {
  t: readonly number[];
  u: readonly number[];
}

/** Pearson's; 0 when one of the two does not vary. */
function correlation({ t, u }: Pairs): number {
  const [mt, mu] = [mean(t), mean(u)];
  let tu = 0;
  let tt = 0;
  let uu = 0;
  for (let i = 0; i < t.length; i++) {
    tu += (t[i] - mt) * (u[i] - mu);
    tt += (t[i] - mt) ** 2;
    uu += (u[i] - mu) ** 2;
  }
  return tt > 0 && uu > 0 ? tu / Math.sqrt(tt * uu) : 0;
}

/** t statistic of c₂; 0 when t takes too few values for a parabola, or the parabola fits without rest. */
export function quadraticTerm({ t, u }: Pairs): number {
  const n = t.length;
  const size = Math.sqrt(mean(t.map((value) => value * value)));
  if (!(size > 0) || n < 5) return 0;
  const design = t.map((value) => [1, value / size, (value / size) ** 2]);
  const normal = new Matrix(3, 3);
  const right = new Matrix(3, 1);
  design.forEach((row, i) => {
    for (let a = 0; a < 3; a++) {
      right.set(a, 0, right.get(a, 0) + row[a] * u[i]);
      for (let b = 0; b < 3; b++) normal.set(a, b, normal.get(a, b) + row[a] * row[b]);
    }
  });
  const eye = new Matrix([[0], [0], [1]]);
  let c: Matrix;
  let variance: number;
  try {
    c = solve(normal, right);
    variance = solve(normal, eye).get(2, 0);
  } catch {
    return 0; // t takes only one or two values: nothing can bend
  }
  let left = 0;
  design.forEach((row, i) => {
    left += (u[i] - row.reduce((sum, value, a) => sum + value * c.get(a, 0), 0)) ** 2;
  });
  const error = Math.sqrt((left / (n - 3)) * variance);
  return error > 0 && Number.isFinite(error) ? c.get(2, 0) / error : 0;
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}
