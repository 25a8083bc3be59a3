import { type Axis, AxisError, describeAxis, evenSpacing } from "../axis.ts";
import { type Apply, type Fitted, StepError } from "../step.ts";

/**
 * The weights that give the derivative of a least-squares polynomial over `window` evenly spaced points, taken at each of them.
 *
 *     w(i, ·) = d! / δᵈ · row d of (VᵀV)⁻¹ Vᵀ shifted to point i      V_kj = k_jᵒ, k = −half … half
 *
 * Worked with Gram polynomials (orthogonal over the window), which stay exact where powers would lose digits.
 *
 * @returns window rows of window weights: row i is for point i, the middle row is the one for the inside of a spectrum.
 *          Unit: that of the values, divided by (unit of the axis)^derivative
 *
 * Source: Savitzky & Golay, Anal. Chem. 36 (1964) 1627, corrected by Steinier, Termonia & Deltour, Anal. Chem. 44 (1972) 1906; the form
 * by Gram polynomials with fitted ends is Gorry's, Anal. Chem. 62 (1990) 570 (all from memory). Checked against the printed integers and
 * scipy: test/reference/preprocessing.test.ts.
 */
export function savitzkyGolayWeights(
  window: number,
  order: number,
  derivative: number,
  spacing: number,
): Float64Array[] {
  const half = (window - 1) / 2;
  const scale = 1 / spacing ** derivative;
  const values = Array.from({ length: window }, (_, j) => gramPolynomials(j - half, half, order, derivative));
  return values.map((at) => {
    const weights = new Float64Array(window);
    for (let k = 0; k <= order; k++) {
      const factor = ((2 * k + 1) * fallingProduct(2 * half, k)) / fallingProduct(2 * half + k + 1, k + 1);
      for (let j = 0; j < window; j++) weights[j] += factor * values[j][0][k] * at[derivative][k] * scale;
    }
    return weights;
  });
}

/** Applies the weights: the middle ones inside, and at either end the polynomial of the first or last `window` points. */
export function savitzkyGolay(step: Fitted<"savitzky-golay">, axis: Axis): Apply {
  const spacing = checkSavitzkyGolay(step, axis);
  const { window } = step;
  const half = (window - 1) / 2;
  const weights = savitzkyGolayWeights(window, step.order, step.derivative, spacing);
  return (values, out) => {
    const p = values.length;
    for (let j = 0; j < p; j++) {
      const first = Math.max(0, Math.min(p - window, j - half));
      const row = weights[j - first];
      let sum = 0;
      for (let k = 0; k < window; k++) sum += row[k] * values[first + k];
      out[j] = sum;
    }
  };
}

/**
 * The spacing that the step will use.
 *
 * @throws StepError when the window is even, not above the order, or longer than the spectrum, or the derivative is above the order
 * @throws AxisError when the axis is not evenly spaced
 */
export function checkSavitzkyGolay({ window, order, derivative }: Fitted<"savitzky-golay">, axis: Axis): number {
  const where = `savitzky-golay ${window} ${order} ${derivative}`;
  if (window % 2 === 0) {
    throw new StepError(`${where}: the window`, {
      got: `${window}`,
      expected: "an odd number of points",
      todo: "Add one.",
    });
  }
  if (window <= order) {
    const todo =
      "Widen the window or lower the order: through so few points the polynomial runs exactly and smooths nothing.";
    throw new StepError(`${where}: the window`, { got: `${window}`, expected: `more than the order, ${order}`, todo });
  }
  if (derivative > order) {
    const todo = "Raise the order: a polynomial's higher derivatives are zero everywhere.";
    throw new StepError(`${where}: the derivative`, {
      got: `${derivative}`,
      expected: `at most the order, ${order}`,
      todo,
    });
  }
  if (window > axis.points.length) {
    const expected = `at most the number of channels, ${axis.points.length}`;
    throw new StepError(`${where}: the window`, { got: `${window}`, expected, todo: "Take a shorter window." });
  }
  const spacing = evenSpacing(axis);
  if (spacing === undefined) {
    throw new AxisError(`${where}: the axis (${describeAxis(axis)})`, {
      got: "not evenly spaced here",
      expected: "evenly spaced",
      todo: "Put a select of several ranges after savitzky-golay, or bring the spectra to an even axis first.",
    });
  }
  return spacing;
}

/** Derivative d of the Gram polynomial of degree k over −half … half, at i, as [d][k]: by the three-term recurrence. */
function gramPolynomials(i: number, half: number, order: number, derivative: number): number[][] {
  const table: number[][] = [];
  for (let d = 0; d <= derivative; d++) {
    const row: number[] = [d === 0 ? 1 : 0];
    for (let k = 1; k <= order; k++) {
      const a = (4 * k - 2) / (k * (2 * half - k + 1));
      const b = ((k - 1) * (2 * half + k)) / (k * (2 * half - k + 1));
      const lowered = d === 0 ? 0 : d * table[d - 1][k - 1];
      row.push(a * (i * row[k - 1] + lowered) - b * (k > 1 ? row[k - 2] : 0));
    }
    table.push(row);
  }
  return table;
}

/** n (n − 1) … , `count` factors. */
function fallingProduct(n: number, count: number): number {
  let product = 1;
  for (let i = n - count + 1; i <= n; i++) product *= i;
  return product;
}
