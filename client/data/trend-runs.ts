import { type Verdict, verdictsOfMask, worstOfMask } from "../../core/messages/index.ts";
import { type HeldTrend, reachMs } from "./trend-columns.ts";

/** A stretch of neighbours that are drawn in one manner. `joins`: its line begins at the point before `first`, which belongs to another run. */
export interface Run {
  verdict: Verdict;
  first: number;
  last: number;
  joins: boolean;
}

export interface Gap {
  from: number;
  to: number;
}

/**
 * How one interval is drawn. An interval of many readings that were inside but for a few is drawn as inside: the few are seen in the ribbon
 * and in the minimum–maximum band. Where the mean ratio is itself beyond the limit, doubt has the word.
 */
export function verdictOfInterval(mask: number, t2Mean: number | null, qMean: number | null): Verdict | undefined {
  const held = verdictsOfMask(mask);
  if (!held.includes("inside")) return worstOfMask(mask);
  if (held.includes("unfamiliar") && qMean !== null && qMean > 1) return "unfamiliar";
  if (held.includes("extrapolated") && t2Mean !== null && t2Mean > 1) return "extrapolated";
  return "inside";
}

/**
 * Cuts a property's trend into runs. A line never crosses a gap, nor a reading without a value; where the verdict changes from one reading to
 * the next, the piece between them is drawn in the doubtful manner.
 */
export function trendRuns(trend: HeldTrend, property: string): Run[] {
  const values = trend.properties[property]?.mean ?? [];
  const isBroken = breaksOf(trend);
  const runs: Run[] = [];
  let run: Run | undefined;
  for (let index = 0; index < trend.time.length; index++) {
    const verdict = verdictOfInterval(trend.verdict[index], trend.t2.mean[index], trend.q.mean[index]);
    const broken = isBroken(index) || run === undefined;
    if (values[index] === null || values[index] === undefined || !verdict) {
      run = undefined;
      continue;
    }
    if (run && !broken && run.verdict === verdict) {
      run.last = index;
      continue;
    }
    // The piece between the last doubtful and the first inside reading stays doubtful.
    if (run && !broken && verdict === "inside") run.last = index;
    run = { verdict, first: index, last: index, joins: !broken && verdict !== "inside" };
    runs.push(run);
  }
  return runs;
}

/** Tells of each entry, asked in ascending order, whether a gap lies between it and the one before. */
function breaksOf({ time, gaps }: HeldTrend): (index: number) => boolean {
  let next = 0;
  return (index) => {
    let broken = false;
    while (next < gaps.length && gaps[next][1] <= time[index]) {
      broken = broken || index === 0 || gaps[next][0] >= time[index - 1];
      next += 1;
    }
    return broken;
  };
}

/**
 * The stretches within [from, to] without any reading: before the first that is on record, between, and after the newest. Of what lies
 * outside the stretch that was read from the server nothing is said, but for a live window: there nothing newer has come. Where what is shown
 * is old (`old`), all that lies after the newest reading counts as a gap, however short.
 */
export function gapsOf(
  trend: HeldTrend,
  window: { from: number; to: number; live: boolean; old?: boolean },
  gapMs: number,
): Gap[] {
  const { time, gaps, widthMs } = trend;
  const reach = reachMs(trend, gapMs);
  const from = Math.max(window.from, trend.from);
  const to = window.live ? window.to : Math.min(window.to, trend.to);
  const all: Gap[] = gaps.map(([start, end]) => ({ from: start, to: end }));
  if (time.length === 0) all.push({ from, to });
  else {
    if (time[0] - trend.from > reach) all.push({ from: trend.from, to: time[0] - widthMs / 2 });
    const end = Math.max(trend.newest, time[time.length - 1] + widthMs / 2);
    if (to - trend.newest > (window.old ? 0 : reach)) all.push({ from: end, to });
  }
  return all
    .map((gap) => ({ from: Math.max(from, gap.from), to: Math.min(to, gap.to) }))
    .filter((gap) => gap.to > gap.from)
    .sort((a, b) => a.from - b.from);
}
