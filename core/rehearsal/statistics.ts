import { chiSquaredQuantile, fQuantile } from "../limits/index.ts";
import type { Model } from "../model/index.ts";
import { noGap, type RecordedStretch } from "./stretch.ts";

/** A statistic's theory as its quantile function, in the statistic's own unit. */
export type Theory = (probability: number) => number;

/**
 * What the textbook expects of new readings of the calibration's kind.
 *
 * T²: A(n²−1)/(n(n−A)) · F(A, n−A) (NIST/SEMATECH e-Handbook §6.5.4.3.4). Q: g·χ²(h) with g = v/2m, h = 2m²/v from mean m and variance v of
 * the cross-validated residuals (Box 1954; Nomikos & MacGregor 1995). Undefined where the model lacks what it is made of.
 */
export function theoryOf(model: Model): { t2?: Theory; q?: Theory } {
  const n = model.scores?.length;
  const A = model.components;
  const residuals = model.residuals?.crossValidated?.q;
  return {
    ...(n === undefined ? {} : { t2: (p: number) => ((A * (n * n - 1)) / (n * (n - A))) * fQuantile(p, A, n - A) }),
    ...(residuals === undefined ? {} : { q: boxTheory(residuals) }),
  };
}

function boxTheory(q: readonly number[]): Theory {
  const m = q.reduce((sum, value) => sum + value, 0) / q.length;
  const v = q.reduce((sum, value) => sum + (value - m) ** 2, 0) / (q.length - 1);
  const g = v / (2 * m);
  const h = (2 * m * m) / v;
  return (p) => g * chiSquaredQuantile(p, h);
}

/** How one statistic went over a stretch, as ratios to its limit in force. */
export interface StatisticPicture {
  readings: number;
  /** share of the usable readings beyond the limit, and what the limit's confidence promises; 0–1 */
  beyond: number;
  nominal: number | null;
  /** counts by log10 of the ratio: bin i lies between edges[i] and edges[i + 1] */
  edges: number[];
  counts: number[];
  /** how many the theory expects in each bin; null where there is none */
  expected: number[] | null;
  /** ratio by probability: what was seen, and what the theory says */
  quantiles: { probability: number; seen: number; theory: number | null }[];
  /** correlation of ln(ratio) with itself k readings earlier, k = 0 … */
  autocorrelation: number[];
  /** readings that so many correlated ones are worth for a mean: n(1 − φ)/(1 + φ), φ the correlation of neighbours */
  worth: number | null;
}

const bins = 60;
const lowest = -3;
const highest = 2;
const probabilities = [0.001, 0.005, 0.01, 0.05, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 0.95, 0.99, 0.995, 0.999];
const lags = 120;

/**
 * Why the textbook limit alarms too often here, or too seldom: the distribution beside the theory, the quantiles, and how long readings
 * remember each other.
 *
 * @param nominal share that the limit's method and confidence promise beyond it
 */
export function pictureOf(
  stretch: RecordedStretch,
  statistic: Float64Array,
  { limit, nominal, theory }: { limit: number; nominal: number | null; theory?: Theory },
): StatisticPicture {
  const usable = statistic.filter((value) => !Number.isNaN(value)).map((value) => value / limit);
  const sorted = Float64Array.from(usable).sort();
  const n = sorted.length;
  const edges = Array.from({ length: bins + 1 }, (_, i) => 10 ** (lowest + ((highest - lowest) * i) / bins));
  const autocorrelation = autocorrelationOf(stretch, statistic, limit);
  const phi = autocorrelation[1];
  return {
    readings: n,
    beyond: n === 0 ? 0 : usable.reduce((count, ratio) => count + (ratio > 1 ? 1 : 0), 0) / n,
    nominal,
    edges,
    counts: countsOf(usable),
    expected: theory && n > 0 ? expectedOf(theory, limit, edges, n) : null,
    quantiles:
      n === 0
        ? []
        : probabilities.map((probability) => ({
            probability,
            seen: sorted[Math.min(n - 1, Math.floor(probability * n))],
            theory: theory ? theory(probability) / limit : null,
          })),
    autocorrelation,
    worth: phi === undefined || n === 0 ? null : (n * (1 - phi)) / (1 + phi),
  };
}

function countsOf(ratios: Float64Array): number[] {
  const counts = new Array<number>(bins).fill(0);
  for (const ratio of ratios) {
    const place = Math.floor(((Math.log10(Math.max(ratio, 1e-12)) - lowest) / (highest - lowest)) * bins);
    counts[Math.min(bins - 1, Math.max(0, place))]++;
  }
  return counts;
}

/** The distribution function by halving: the quantile function is what there is, and it rises. */
function expectedOf(theory: Theory, limit: number, edges: readonly number[], n: number): number[] {
  const below = edges.map((edge) => {
    let [low, high] = [0, 1];
    for (let step = 0; step < 30; step++) {
      const middle = (low + high) / 2;
      if (theory(middle) < edge * limit) low = middle;
      else high = middle;
    }
    return low;
  });
  return below.slice(1).map((upper, i) => n * (upper - below[i]));
}

/** Of ln(ratio), over pairs without a gap between them; empty for fewer than ten readings or a statistic that never changes. */
function autocorrelationOf({ gap }: RecordedStretch, statistic: Float64Array, limit: number): number[] {
  const y = statistic.map((value) => Math.log(Math.max(value / limit, 1e-12)));
  let n = 0;
  let sum = 0;
  for (const value of y) {
    if (Number.isNaN(value)) continue;
    n++;
    sum += value;
  }
  if (n < 10) return [];
  const mean = sum / n;
  // Where the present unbroken run began: pairs across a gap say nothing.
  const runOf = new Int32Array(y.length);
  for (let i = 1; i < y.length; i++) runOf[i] = runOf[i - 1] + (gap[i] === noGap ? 0 : 1);
  const moment = (lag: number) => {
    let total = 0;
    let pairs = 0;
    for (let i = lag; i < y.length; i++) {
      const product = (y[i] - mean) * (y[i - lag] - mean);
      if (runOf[i] !== runOf[i - lag] || Number.isNaN(product)) continue;
      total += product;
      pairs++;
    }
    return pairs === 0 ? Number.NaN : total / pairs;
  };
  const variance = moment(0);
  if (!(variance > 0)) return [];
  const most = Math.min(lags, Math.floor(n / 4));
  const correlations: number[] = [];
  for (let lag = 0; lag <= most; lag++) {
    const value = moment(lag) / variance;
    if (Number.isNaN(value)) break;
    correlations.push(value);
  }
  return correlations;
}
