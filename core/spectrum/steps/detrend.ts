import type { Axis } from "../axis.ts";
import { type Apply, type Fitted, StepError } from "../step.ts";

/**
 * Takes away each spectrum's least-squares polynomial over the axis: order 0 its mean, 1 a line, 2 a parabola.
 *
 * Source: Barnes, Dhanoa & Lister, Appl. Spectrosc. 43 (1989) 772, who take a parabola after SNV (from memory). Checked against numpy:
 * test/reference/preprocessing.test.ts.
 */
export function detrend({ order }: Fitted<"detrend">, axis: Axis): Apply {
  const basis = orthonormalPolynomials(axis, order);
  return (values, out) => {
    if (out !== values) out.set(values);
    for (const polynomial of basis) {
      let share = 0;
      for (let j = 0; j < polynomial.length; j++) share += out[j] * polynomial[j];
      for (let j = 0; j < polynomial.length; j++) out[j] -= share * polynomial[j];
    }
  };
}

/** @throws StepError when the polynomial would run through every channel. */
export function checkDetrend({ order }: Fitted<"detrend">, axis: Axis): void {
  if (order + 1 < axis.points.length) return;
  throw new StepError(`detrend ${order}: the order`, {
    got: `${order} on ${axis.points.length} channels`,
    expected: "fewer than the channels less one",
    todo: "Lower the order, or keep more channels.",
  });
}

/** Polynomials of degree 0 … order, orthonormal over the points of the axis (modified Gram–Schmidt, done twice against rounding). */
function orthonormalPolynomials({ points }: Axis, order: number): Float64Array[] {
  const p = points.length;
  const middle = (points[0] + points[p - 1]) / 2;
  const half = (points[p - 1] - points[0]) / 2;
  const basis: Float64Array[] = [];
  for (let degree = 0; degree <= order; degree++) {
    const column = Float64Array.from(points, (point, j) =>
      degree === 0 ? 1 : basis[degree - 1][j] * ((point - middle) / half),
    );
    for (let pass = 0; pass < 2; pass++) {
      for (const earlier of basis) {
        const share = dot(column, earlier);
        for (let j = 0; j < p; j++) column[j] -= share * earlier[j];
      }
    }
    const length = Math.sqrt(dot(column, column));
    basis.push(column.map((value) => value / length));
  }
  return basis;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let j = 0; j < a.length; j++) sum += a[j] * b[j];
  return sum;
}
