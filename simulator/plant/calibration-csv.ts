import { wavelengths } from "./axis.ts";
import type { CalibrationSample } from "./calibration-set.ts";
import type { StreamPlan } from "./streams.ts";

/** The calibration table: a header row; sample, time, group, the properties (wt%), then one column a channel, headed by its wavelength. */
export function calibrationCsv(plan: StreamPlan, samples: readonly CalibrationSample[]): string {
  const header = ["sample", "time", "group", ...plan.properties.map(({ name }) => name), ...wavelengths];
  const rows = samples.map(({ sample, time, group, results, values }) => [
    sample,
    new Date(time).toISOString(),
    group,
    // A laboratory reports four decimals here; nine digits give a float32 back exactly.
    ...results.map((result) => result.toFixed(4)),
    ...Array.from(values, (value) => Number(value.toPrecision(9))),
  ]);
  return `${[header, ...rows].map((row) => row.join(",")).join("\n")}\n`;
}
