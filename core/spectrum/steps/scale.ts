import { type Apply, type Fitted, type Spectra, StepError } from "../step.ts";
import { meanSpectrum } from "./center.ts";

/** Divides each channel by its standard deviation over the calibration spectra (divisor n − 1). */
export function scale({ deviation }: Fitted<"scale">): Apply {
  return (values, out) => {
    for (let j = 0; j < values.length; j++) out[j] = values[j] / deviation[j];
  };
}

/**
 * @throws StepError naming the first channel that does not vary over the samples: it has no unit of its own, and to drop it
 * unseen would hide from Q whatever appears there later.
 */
export function fitScale({ axis, rows }: Spectra): Fitted<"scale"> {
  const mean = meanSpectrum(rows);
  // against all channels, not its own: where steps leave nothing but rounding, that rounding is all a channel has
  let largest = 0;
  for (const row of rows) for (const value of row) largest = Math.max(largest, Math.abs(value));
  const deviation = Array.from(mean, (centre, j) => {
    let squares = 0;
    for (const row of rows) squares += (row[j] - centre) ** 2;
    const found = Math.sqrt(squares / (rows.length - 1));
    if (found > 1e-11 * largest) return found;
    throw new StepError(`scale: the channel at ${axis.points[j]} ${axis.unit}`, {
      got: `${rows[0][j]} in every sample`,
      expected: "a channel that varies",
      todo: "Leave the channel out with select, or the step scale.",
    });
  });
  return { step: "scale", deviation };
}
