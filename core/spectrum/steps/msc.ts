import type { Apply, Fitted, Spectra } from "../step.ts";
import { meanSpectrum } from "./center.ts";
import { checkNotFlat } from "./snv.ts";

/**
 * Multiplicative scatter correction: least squares x = a + b · reference + e over all channels, then (x − a) / b.
 *
 * Source: Geladi, MacDougall & Martens, Appl. Spectrosc. 39 (1985) 491 (from memory). Checked against numpy: test/reference/preprocessing.test.ts.
 */
export function msc({ reference }: Fitted<"msc">): Apply {
  const { centred, mean, squares } = regressor(reference);
  return (values, out) => {
    const p = values.length;
    let total = 0;
    for (let j = 0; j < p; j++) total += values[j];
    let product = 0;
    for (let j = 0; j < p; j++) product += (values[j] - total / p) * centred[j];
    const slope = product / squares;
    const intercept = total / p - slope * mean;
    for (let j = 0; j < p; j++) out[j] = (values[j] - intercept) / slope;
  };
}

/** The reference is the mean of the calibration spectra. @throws StepError when it, or a sample, is flat. */
export function fitMsc(spectra: Spectra): Fitted<"msc"> {
  const reference = meanSpectrum(spectra.rows);
  checkNotFlat({ ...spectra, rows: [reference], names: ["mean of all"] }, "msc");
  checkNotFlat(spectra, "msc");
  return { step: "msc", reference: Array.from(reference) };
}

/** What the regression on a reference needs again and again. */
export function regressor(reference: ArrayLike<number>): { centred: Float64Array; mean: number; squares: number } {
  const values = Float64Array.from(reference);
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  const centred = values.map((value) => value - mean);
  return { centred, mean, squares: centred.reduce((sum, value) => sum + value * value, 0) };
}
