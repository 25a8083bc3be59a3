import type { PlantProperty } from "../../core/messages/index.ts";
import { type Verdict, verdictsOfMask, worstOfMask } from "../../core/messages/index.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted, decimalsFor, fixed, named, ratio, withUnit } from "../words/quantity.ts";
import { firstAtOrAfter, type HeldTrend } from "./trend-columns.ts";
import { gapsOf } from "./trend-runs.ts";

export interface TrendSight {
  trend: HeldTrend;
  gapMs: number;
  live: boolean;
  property: PlantProperty;
  from: number;
  to: number;
  now: number;
  time: PlantTime;
}

/** The chart in a sentence or two, for whoever cannot see it. */
export function trendSentence({ trend, property, from, to, now, time, gapMs, live }: TrendSight): string {
  const first = firstAtOrAfter(trend.time, from);
  const end = firstAtOrAfter(trend.time, to);
  const stretch = `${named(property.name)}, ${time.exact(from, now)} to ${time.exact(to, now)} (${duration(to - from)})`;
  if (end <= first) return `${stretch}: no readings.`;
  const { min, max } = trend.properties[property.name];
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  const odd = new Map<Verdict, number>();
  for (let index = first; index < end; index++) {
    low = Math.min(low, min[index] ?? low);
    high = Math.max(high, max[index] ?? high);
    const worst = worstOfMask(trend.verdict[index]);
    if (worst && worst !== "inside") odd.set(worst, (odd.get(worst) ?? 0) + 1);
  }
  const decimals = decimalsIn(trend, property);
  const spread = Number.isFinite(low)
    ? `between ${fixed(low, decimals)} and ${withUnit(fixed(high, decimals), property.unit)}`
    : "no values";
  const kind = trend.whole ? "reading" : "interval";
  const doubts = [...odd].map(([verdict, count]) => `${counted(count, kind)} ${verdict}`);
  const gaps = gapsOf(trend, { from, to, live }, gapMs).length;
  return `${stretch}: ${spread}; ${doubts.length ? doubts.join(", ") : "all inside"}; ${gaps ? counted(gaps, "gap") : "no gaps"}.`;
}

/** Decimals of a property's values in a trend: what the last known uncertainty leaves. */
export function decimalsIn(trend: HeldTrend, property: PlantProperty): number {
  const column = trend.properties[property.name]?.uncertainty ?? [];
  for (let index = column.length - 1; index >= 0; index--) {
    if (column[index]) return decimalsFor(column[index]);
  }
  return decimalsFor((property.scale[1] - property.scale[0]) / 100);
}

export interface TrendRow {
  at: number;
  value: string;
  verdict: string;
  t2: string;
  q: string;
}

/** The chart as rows, evenly taken where there are more than `most`; the newest first. */
export function trendRows({ trend, property, from, to }: TrendSight, most = 40): TrendRow[] {
  const first = firstAtOrAfter(trend.time, from);
  const end = firstAtOrAfter(trend.time, to);
  const step = Math.max(1, Math.ceil((end - first) / most));
  const rows: TrendRow[] = [];
  for (let index = end - 1; index >= first; index -= step) rows.push(trendRow(trend, property, index));
  return rows;
}

/** One interval in words; a span where it holds several readings. */
export function trendRow(trend: HeldTrend, property: PlantProperty, index: number): TrendRow {
  const { mean, min, max, uncertainty } = trend.properties[property.name];
  const decimals = decimalsIn(trend, property);
  const value = mean[index];
  let words = "no number";
  if (value !== null && value !== undefined) {
    const half = uncertainty[index];
    const verdict = worstOfMask(trend.verdict[index]);
    const around = half && verdict === "inside" ? ` ± ${fixed(half, decimals)}` : "";
    const [low, high] = [fixed(min[index] ?? value, decimals), fixed(max[index] ?? value, decimals)];
    const spread = !trend.whole && low !== high ? ` (${low} to ${high})` : "";
    words = `${withUnit(`${fixed(value, decimals)}${spread ? "" : around}`, property.unit)}${spread}`;
  }
  return {
    at: trend.time[index],
    value: words,
    verdict: verdictsOfMask(trend.verdict[index]).join(", "),
    t2: ratio(trend.t2.max[index]),
    q: ratio(trend.q.max[index]),
  };
}
