import quantile from "@stdlib/stats-base-dists-normal-quantile";

const size = 4096;
let table: Float64Array | undefined;

/** The mid-point quantiles of the standard normal in 4096 even steps (|z| ≤ 3.7), made to have variance 1. */
export function normalTable(): Float64Array {
  if (table) return table;
  const quantiles = Float64Array.from({ length: size }, (_, i) => quantile((i + 0.5) / size, 0, 1));
  const spread = Math.sqrt(quantiles.reduce((sum, z) => sum + z * z, 0) / size);
  table = quantiles.map((z) => z / spread);
  return table;
}

/**
 * Adds independent normal noise to every value, in place. A table look-up: a fortnight of readings has 36 million channels, too many for a
 * transcendental function each.
 *
 * @param state     where the noise starts; the same state gives the same noise
 * @param deviation standard deviation, unit of `values`
 */
export function addNoiseInPlace(values: Float64Array, state: number, deviation: number): void {
  const z = normalTable();
  let x = state | 0 || 0x9e3779b9;
  for (let j = 0; j < values.length; j++) {
    x ^= x << 13;
    x ^= x >>> 17;
    x ^= x << 5;
    values[j]! += deviation * z[(x >>> 11) & (size - 1)]!;
  }
}
