import { type CalibrationSet, seededRandom } from "../../core/pls/index.ts";
import { type Axis, axisFromSpec } from "../../core/spectrum/index.ts";

/** Spectra of mixtures of invented bands with scatter and noise; the property is the first ingredient's amount. Seeded: the same every run. */
export function inventedSpectra(count: number, channels: number, { ingredients = 10, seed = 1 } = {}): CalibrationSet {
  const random = seededRandom(seed);
  const normal = normalOf(random);
  const axis: Axis = axisFromSpec({ unit: "nm", start: 1000, step: 1200 / (channels - 1), count: channels });
  // the bands are the same whatever the seed: only amounts and noise differ
  const shape = seededRandom(20);
  const bands = Array.from({ length: ingredients }, () => {
    const peaks = Array.from({ length: 3 }, () => [1000 + 1200 * shape(), 20 + 60 * shape(), shape()]);
    return axis.points.map((x) =>
      peaks.reduce((sum, [at, width, height]) => sum + height * Math.exp(-0.5 * ((x - at) / width) ** 2), 0),
    );
  });
  const amounts = Array.from({ length: count }, () => bands.map(() => random()));
  const rows = amounts.map((amount) => {
    const gain = 1 + 0.05 * normal();
    const offset = 0.05 * normal();
    return axis.points.map(
      (_, j) => gain * bands.reduce((sum, band, k) => sum + amount[k] * band[j], 0) + offset + 0.001 * normal(),
    );
  });
  return {
    spectra: { axis, rows, names: rows.map((_, i) => String(i + 1)) },
    y: amounts.map(([first]) => Float64Array.of(100 * first + 0.2 * normal())),
    propertyNames: ["first"],
  };
}

/** Box & Muller. */
export function normalOf(random: () => number): () => number {
  return () => Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
}
