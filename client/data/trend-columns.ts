import type { Judged, Trend } from "../../core/messages/index.ts";
import { verdictMask } from "../../core/messages/index.ts";

/** A trend as a screen holds it: `newest` is the time of the newest reading in it, −∞ while there is none. */
export interface HeldTrend extends Trend {
  newest: number;
}

/** An answer of the server, ready to be held. */
export function held(trend: Trend): HeldTrend {
  return { ...trend, newest: trend.time.at(-1) ?? Number.NEGATIVE_INFINITY };
}

type Numbers = (number | null)[];
const larger = (a: number | null, b: number | null) => (a === null ? b : b === null ? a : Math.max(a, b));
const smaller = (a: number | null, b: number | null) => (a === null ? b : b === null ? a : Math.min(a, b));
const mean = (a: number | null, count: number, b: number | null) =>
  a === null ? b : b === null ? a : a + (b - a) / (count + 1);

function fold(
  column: Numbers,
  last: boolean,
  value: number | null,
  join: (a: number | null, b: number | null) => number | null,
) {
  if (last) column[column.length - 1] = join(column[column.length - 1], value);
  else column.push(value);
}

/**
 * Adds a live reading at the end of a trend, in its last interval where that still holds it, else as a new one. Changes `trend`.
 * In a trend of whole readings one that is not newer than the last is left out (it is there already): returns false. In one of intervals a
 * reading that came while the trend was being read may be counted twice: that moves no minimum, no maximum and no verdict.
 *
 * @param gapMs a reading that comes so much later than the one before leaves a gap between them
 */
export function appendInPlace(trend: HeldTrend, judged: Judged, gapMs: number): boolean {
  const last = trend.time.length - 1;
  const intervalOf = (at: number) => Math.floor(at / trend.widthMs);
  const sameInterval = !trend.whole && last >= 0 && intervalOf(judged.time) === intervalOf(trend.time[last]);
  if (last >= 0 && judged.time <= trend.time[last] && !sameInterval) return false;
  if (last >= 0 && judged.time - trend.newest > reachMs(trend, gapMs)) trend.gaps.push([trend.newest, judged.time]);
  const count = sameInterval ? trend.count[last] : 0;
  const join = (a: number | null, b: number | null) => mean(a, count, b);
  if (sameInterval) {
    trend.count[last] += 1;
    trend.verdict[last] |= verdictMask(judged.verdict);
  } else {
    trend.time.push(judged.time);
    trend.count.push(1);
    trend.verdict.push(verdictMask(judged.verdict));
  }
  for (const [name, column] of Object.entries(trend.properties)) {
    const { value, uncertainty } = judged.properties[name] ?? { value: null, uncertainty: null };
    fold(column.mean, sameInterval, value, join);
    fold(column.min, sameInterval, value, smaller);
    fold(column.max, sameInterval, value, larger);
    fold(column.uncertainty, sameInterval, uncertainty, join);
  }
  fold(trend.t2.max, sameInterval, judged.ratios.t2, larger);
  fold(trend.t2.mean, sameInterval, judged.ratios.t2, join);
  fold(trend.q.max, sameInterval, judged.ratios.q, larger);
  fold(trend.q.mean, sameInterval, judged.ratios.q, join);
  trend.newest = Math.max(trend.newest, judged.time);
  trend.to = Math.max(trend.to, judged.time);
  return true;
}

/** Drops what lies before `from`, so that a screen that stands open for weeks holds no more than its window. Changes `trend`. */
export function trimInPlace(trend: Trend, from: number): void {
  const keep = firstAtOrAfter(trend.time, from);
  if (keep === 0) return;
  const columns: unknown[][] = [trend.time, trend.count, trend.verdict];
  for (const { mean, min, max, uncertainty } of Object.values(trend.properties))
    columns.push(mean, min, max, uncertainty);
  columns.push(trend.t2.max, trend.t2.mean, trend.q.max, trend.q.mean);
  for (const column of columns) column.splice(0, keep);
  trend.gaps = trend.gaps.filter(([, end]) => end > from);
  trend.from = Math.max(trend.from, from);
}

/** Index of the first time ≥ `at` in an ascending column; its length when there is none. */
export function firstAtOrAfter(time: readonly number[], at: number): number {
  let low = 0;
  let high = time.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (time[middle] < at) low = middle + 1;
    else high = middle;
  }
  return low;
}

/**
 * Index of the entry that speaks for a moment: the nearest one, unless a gap lies about the moment; before the first and after the last entry
 * only within reach. undefined where there is none.
 */
export function entryAt(trend: HeldTrend, at: number, gapMs: number): number | undefined {
  const { time, gaps } = trend;
  if (gaps.some(([from, to]) => from < at && at < to)) return undefined;
  const after = firstAtOrAfter(time, at);
  const before = after - 1;
  if (before < 0 || after >= time.length) {
    const only = before < 0 ? after : before;
    return only >= 0 && only < time.length && Math.abs(time[only] - at) <= reachMs(trend, gapMs) ? only : undefined;
  }
  return at - time[before] <= time[after] - at ? before : after;
}

/** How far from an entry a moment may lie and still be spoken for by it. */
export function reachMs(trend: Trend, gapMs: number): number {
  return Math.max(gapMs, trend.widthMs);
}
