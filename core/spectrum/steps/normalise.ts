import { type Apply, type Fitted, type Spectra, StepError } from "../step.ts";

/** Divides each spectrum by its size: `area` is Σ|x| over the channels, `length` is √Σx². */
export function normalise({ by }: Fitted<"normalise">): Apply {
  return (values, out) => {
    const size = sizeOf(values, by);
    for (let j = 0; j < values.length; j++) out[j] = values[j] / size;
  };
}

/** @throws StepError naming the first sample that is zero throughout. */
export function checkNotZero({ rows, names }: Spectra, { by }: Fitted<"normalise">): void {
  const zero = rows.findIndex((row) => !(sizeOf(row, by) > 0));
  if (zero < 0) return;
  throw new StepError(`normalise ${by}: sample ${names[zero]}`, {
    got: "zero in every channel",
    expected: "a spectrum with some size",
    todo: "Exclude the sample.",
  });
}

function sizeOf(values: Float64Array, by: "area" | "length"): number {
  let sum = 0;
  for (let j = 0; j < values.length; j++) sum += by === "area" ? Math.abs(values[j]) : values[j] * values[j];
  return by === "area" ? sum : Math.sqrt(sum);
}
