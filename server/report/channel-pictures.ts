import type { Calibration, Diagnostics } from "../../core/pls/index.ts";
import type { Axis } from "../../core/spectrum/index.ts";
import { Plot } from "./plot.ts";
import { spread } from "./ticks.ts";

const width = 1080;

function axisOf({ unit, points }: Axis) {
  return {
    range: [points[0], points[points.length - 1]] as const,
    label: unit === "cm-1" ? "wavenumber / cm⁻¹" : "wavelength / nm",
    count: 12,
  };
}

/** The calibration spectra as they were measured: mean, and from the smallest to the largest value. */
export function bandPicture({ model, set }: Calibration): Plot {
  const { mean, low, high } = model.band!;
  const { points } = set.spectra.axis;
  const plot = new Plot({
    says: "Calibration spectra before the steps: mean and range",
    width,
    height: 260,
    x: axisOf(set.spectra.axis),
    y: { range: spread([...low, ...high]), label: "as measured" },
  });
  return plot.band(points, low, high).line(
    Array.from(points, (x, j) => [x, mean[j]]),
    "ink",
  );
}

/** One curve over the channels after the steps, broken where channels were left out. */
export function curvePicture(says: string, axis: Axis, values: ArrayLike<number>, label: string, height = 150): Plot {
  const plot = new Plot({
    says,
    width,
    height,
    x: axisOf(axis),
    y: { range: spread([0, ...Array.from(values)]), label, count: 3 },
  });
  plot.level(0, "");
  for (const run of unbroken(axis))
    plot.line(
      run.map((j) => [axis.points[j], values[j]]),
      "ink",
    );
  return plot;
}

/** Regression coefficients of one property with twice their jack-knife standard error. */
export function coefficientPicture(axis: Axis, { name, b, error }: Diagnostics["coefficients"][number]): Plot {
  const low = b.map((value, j) => value - 2 * error[j]);
  const high = b.map((value, j) => value + 2 * error[j]);
  const plot = new Plot({
    says: `Regression coefficients of ${name}`,
    width,
    height: 240,
    x: axisOf(axis),
    y: { range: spread([0, ...low, ...high]), label: `b, ${name}`, count: 5 },
  });
  for (const run of unbroken(axis)) {
    const pick = (values: ArrayLike<number>) => run.map((j) => values[j]);
    plot.band(pick(axis.points), pick(low), pick(high));
  }
  plot.level(0, "");
  for (const run of unbroken(axis))
    plot.line(
      run.map((j) => [axis.points[j], b[j]]),
      "ink",
    );
  return plot;
}

export function vipPicture(axis: Axis, vip: Float64Array): Plot {
  return curvePicture("Variable importance of the channels", axis, vip, "VIP", 200).level(1, "");
}

/** Stretches of channels without a gap: a gap is a step more than 1.5 times the usual. */
function unbroken({ points }: Axis): number[][] {
  const steps = Array.from(points.subarray(1), (point, j) => Math.abs(point - points[j]));
  const usual = [...steps].sort((a, b) => a - b)[steps.length >> 1];
  const runs: number[][] = [[0]];
  steps.forEach((step, j) => {
    if (step > 1.5 * usual) runs.push([]);
    runs.at(-1)!.push(j + 1);
  });
  return runs;
}
