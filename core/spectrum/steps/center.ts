import type { Apply, Fitted, Spectra } from "../step.ts";

/** Takes away the mean of the calibration spectra, channel by channel. */
export function center({ mean }: Fitted<"center">): Apply {
  return (values, out) => {
    for (let j = 0; j < values.length; j++) out[j] = values[j] - mean[j];
  };
}

export function fitCenter({ rows }: Spectra): Fitted<"center"> {
  return { step: "center", mean: Array.from(meanSpectrum(rows)) };
}

export function meanSpectrum(rows: readonly Float64Array[]): Float64Array {
  const mean = new Float64Array(rows[0].length);
  for (const row of rows) for (let j = 0; j < mean.length; j++) mean[j] += row[j];
  return mean.map((sum) => sum / rows.length);
}
