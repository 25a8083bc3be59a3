import { type Apply, type Spectra, StepError } from "../step.ts";

/** A = −log₁₀ T, of transmittance or reflectance (1 is all of the light). NaN where the light is not above zero. */
export function absorbance(): Apply {
  return (values, out) => {
    for (let j = 0; j < values.length; j++) out[j] = values[j] > 0 ? -Math.log10(values[j]) : Number.NaN;
  };
}

/** @throws StepError naming the first sample and channel whose light is not above zero. */
export function checkLight({ axis, rows, names }: Spectra): void {
  rows.forEach((row, i) => {
    const dark = row.findIndex((value) => !(value > 0));
    if (dark < 0) return;
    throw new StepError(`absorbance: sample ${names[i]} at ${axis.points[dark]} ${axis.unit}`, {
      got: `${row[dark]}`,
      expected: "transmittance above 0",
      todo: "Leave the step out if the values are absorbances already, or exclude the sample.",
    });
  });
}
