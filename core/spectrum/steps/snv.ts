import { type Apply, type Spectra, StepError } from "../step.ts";

/**
 * Standard normal variate: (x − x̄) / s, each spectrum by its own mean and its own standard deviation with divisor p − 1.
 *
 * Source: Barnes, Dhanoa & Lister, Appl. Spectrosc. 43 (1989) 772 (from memory). Checked against numpy: test/reference/preprocessing.test.ts.
 */
export function snv(): Apply {
  return (values, out) => {
    const p = values.length;
    let mean = 0;
    for (let j = 0; j < p; j++) mean += values[j];
    mean /= p;
    let squares = 0;
    for (let j = 0; j < p; j++) squares += (values[j] - mean) ** 2;
    const deviation = Math.sqrt(squares / (p - 1));
    for (let j = 0; j < p; j++) out[j] = (values[j] - mean) / deviation;
  };
}

/** @throws StepError naming the first sample that is flat, and so has no shape left to standardise. */
export function checkNotFlat({ rows, names }: Spectra, step: string): void {
  rows.forEach((row, i) => {
    const low = row.reduce((a, b) => Math.min(a, b));
    const high = row.reduce((a, b) => Math.max(a, b));
    if (high - low > 1e-13 * Math.max(Math.abs(low), Math.abs(high))) return;
    throw new StepError(`${step}: sample ${names[i]}`, {
      got: `${low} in every channel`,
      expected: "a spectrum that is not flat",
      todo: "Exclude the sample.",
    });
  });
}
