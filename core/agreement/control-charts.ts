import type { ControlCharts } from "../messages/index.ts";
import { mean } from "./bias-test.ts";

/** d₂ of two results, with which a mean moving range becomes a standard deviation: 2/√π, printed 1.128 */
const d2 = 2 / Math.sqrt(Math.PI);
/** D₄ of two results: upper limit of the moving range, as printed in tables of control chart factors */
const d4 = 3.267;
/** 0.2–0.3 is usual, smaller finds smaller shifts (NIST/SEMATECH e-Handbook; Hunter 1986) */
const lambda = 0.2;
const width = 3;

/** ASTM D6299 sets charts up on at least 15 results (20 in some editions; from memory) and goes on with about 20. */
export const leastBase = 15;
export const mostBase = 20;

/** Scatter from one result to the next, σ = mean|e_i − e_(i−1)|/1.128: a shift of level hardly touches it. NaN for fewer than two. */
export function shortTermSigma(errors: readonly number[]): number {
  return mean(movingRanges(errors)) / d2;
}

export function movingRanges(errors: readonly number[]): number[] {
  return errors.slice(1).map((e, i) => Math.abs(e - errors[i]));
}

/**
 * Control charts of errors in order of time; the first `base` set the limits, all are judged by them.
 *
 *     individuals    centre ± 3 σ        centre = mean e, σ = mean moving range/1.128
 *     moving range   up to 3.267 · mean moving range
 *     EWMA           z_i = λ e_i + (1 − λ) z_(i−1), z_0 = centre;  limits centre ± 3 σ √(λ/(2 − λ) (1 − (1 − λ)^2i)), λ = 0.2
 *
 * A signal is strictly outside. Undefined with fewer than {@link leastBase} errors, or when they do not vary.
 *
 * Source: NIST/SEMATECH e-Handbook 6.3.2 for the charts, ASTM D6299 for their use on laboratory results (both from memory). Checked against R
 * and the printed factors: test/reference/lab-agreement.test.ts.
 */
export function controlCharts(
  errors: readonly number[],
  base = Math.min(errors.length, mostBase),
): ControlCharts | undefined {
  if (base < leastBase || errors.length < base) return undefined;
  const first = errors.slice(0, base);
  const centre = mean(first);
  const meanRange = mean(movingRanges(first));
  const sigma = meanRange / d2;
  if (!(sigma > 0)) return undefined;
  const individuals = { centre, low: centre - width * sigma, high: centre + width * sigma };
  const ranges = [null, ...movingRanges(errors)];
  const movingRangeHigh = d4 * meanRange;
  const ewma = ewmaChart(errors, centre, sigma);
  const signals: ControlCharts["signals"] = errors.flatMap((e, index) => {
    const range = ranges[index] ?? 0;
    const z = ewma.z[index];
    return [
      ...(e < individuals.low || e > individuals.high ? [{ index, chart: "individuals" as const }] : []),
      ...(range > movingRangeHigh ? [{ index, chart: "moving range" as const }] : []),
      ...(z < ewma.low[index] || z > ewma.high[index] ? [{ index, chart: "EWMA" as const }] : []),
    ];
  });
  return { base, individuals, movingRanges: ranges, movingRangeHigh, ewma, signals };
}

/** z with its limits, which open out from the start: sure of nothing at first, they come to ±3 σ √(λ/(2 − λ)). */
export function ewmaChart(errors: readonly number[], centre: number, sigma: number): ControlCharts["ewma"] {
  let last = centre;
  const z = errors.map((e) => {
    last = lambda * e + (1 - lambda) * last;
    return last;
  });
  const half = errors.map(
    (_, i) => width * sigma * Math.sqrt((lambda / (2 - lambda)) * (1 - (1 - lambda) ** (2 * (i + 1)))),
  );
  return { lambda, z, low: half.map((h) => centre - h), high: half.map((h) => centre + h) };
}
