import { type Axis, AxisError, describeAxis } from "./axis.ts";

/**
 * Prepares the way from one axis to another, of either direction and of nm or cm⁻¹ (ν̃ = 10⁷ / λ). The function returned writes
 * the values at the points of `to` into `out`; it allocates nothing and does not change `values`.
 *
 *     out_i = Σ_k values_k Π_{m≠k} (x_i − x_m) / (x_k − x_m)      k, m: the four points of `from` about x_i
 *
 * Lagrange's polynomial of third degree through the four nearest points (fewer on an axis that has fewer), in the unit of `from`:
 * exact for cubics, and a point that `from` has is copied as it is. The unit of the values does not change.
 *
 * @throws AxisError naming the range of `to` that `from` does not cover: nothing is extrapolated.
 *
 * Source: Lagrange interpolation, any text of numerical analysis (from memory).
 */
export function resampler(from: Axis, to: Axis): (values: Float64Array, out: Float64Array) => void {
  const source = from.points;
  const wanted = Float64Array.from(to.points, (point) => (from.unit === to.unit ? point : 1e7 / point));
  checkCovered(from, to, wanted);
  const taps = Math.min(4, source.length);
  const first = new Int32Array(wanted.length);
  const weights = new Float64Array(wanted.length * taps);
  for (let i = 0; i < wanted.length; i++) {
    const x = nearlyOn(source, wanted[i]);
    first[i] = firstOfNearest(source, x, taps);
    lagrangeInto(weights, i * taps, source, first[i], taps, x);
  }
  return (values, out) => {
    if (values.length !== source.length || out.length !== wanted.length) {
      throw new AxisError("spectrum", {
        got: `${values.length} values into ${out.length}`,
        expected: `${source.length} into ${wanted.length}`,
        todo: "Give one value for each point of the axis.",
      });
    }
    for (let i = 0; i < wanted.length; i++) {
      let sum = 0;
      for (let k = 0; k < taps; k++) {
        const weight = weights[i * taps + k];
        if (weight !== 0) sum += weight * values[first[i] + k]; // a point that is copied must not catch its neighbour's NaN
      }
      out[i] = sum;
    }
  };
}

function checkCovered(from: Axis, to: Axis, wanted: Float64Array): void {
  const ends = [from.points[0], from.points[from.points.length - 1]];
  const low = Math.min(...ends);
  const high = Math.max(...ends);
  const slack = 1e-9 * (high - low); // rounding of a change of unit
  const missing = Array.from(to.points).filter((_, i) => wanted[i] < low - slack || wanted[i] > high + slack);
  if (missing.length === 0) return;
  const least = missing.reduce((a, b) => Math.min(a, b));
  const most = missing.reduce((a, b) => Math.max(a, b));
  const unit = to.unit === "cm-1" ? "cm⁻¹" : "nm";
  throw new AxisError("axis", {
    got: describeAxis(from),
    expected: `an axis that covers ${describeAxis(to)}; ${missing.length} points between ${least} and ${most} ${unit} are not covered`,
    todo: "Values are not extrapolated: measure over the whole range, or calibrate on the range that is measured.",
  });
}

/** The point of the source that x lies on, when it lies on one but for rounding; else x. */
function nearlyOn(source: Float64Array, x: number): number {
  const i = lastNotBeyond(source, x);
  for (const k of [i, i + 1]) {
    if (
      k < source.length &&
      Math.abs(source[k] - x) <= 1e-9 * Math.abs(source[Math.max(k, 1)] - source[Math.max(k, 1) - 1])
    )
      return source[k];
  }
  return x;
}

/** Index of the last point that is passed on the way to x, in the direction of the axis; 0 when x stands before the first. */
function lastNotBeyond(source: Float64Array, x: number): number {
  const sign = source[1] > source[0] ? 1 : -1;
  let low = 0;
  let high = source.length - 1;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (sign * (source[middle] - x) <= 0) low = middle;
    else high = middle - 1;
  }
  return low;
}

function firstOfNearest(source: Float64Array, x: number, taps: number): number {
  const before = lastNotBeyond(source, x) - (taps >> 1) + 1;
  return Math.max(0, Math.min(source.length - taps, before));
}

function lagrangeInto(weights: Float64Array, at: number, source: Float64Array, first: number, taps: number, x: number) {
  for (let k = 0; k < taps; k++) {
    let weight = 1;
    for (let m = 0; m < taps; m++) {
      if (m !== k) weight *= (x - source[first + m]) / (source[first + k] - source[first + m]);
    }
    weights[at + k] = weight;
  }
}
