import { tTails } from "../limits/index.ts";
import { biasTest, mean } from "./bias-test.ts";
import { shortTermSigma } from "./control-charts.ts";

/** First and last of a run of errors at one level, by index. */
export interface Run {
  first: number;
  last: number;
}

/** In σ. k: half the shift that is looked for; h: with 4 a shift of 2 σ is seen after 3 or 4 pairs, and none by chance in about 170. */
const k = 0.5;
const h = 4;
/** One wild pair must not make a shift by itself: further than this from the level it counts as this far. */
const mostAway = 3;
/** Neighbours whose levels differ no surer than this are one: strict, because the cut was looked for. */
const differAt = 0.01;

/**
 * Errors in order of time, cut where their level shifts. A two-sided cumulative sum runs against 0 first (agreement), and after a shift
 * against the new level; its onset is the pair after the sum was last at rest, which dates "since when".
 *
 *     C⁺ ← max(0, C⁺ + (e − level)/σ − k)     C⁻ ← max(0, C⁻ − (e − level)/σ − k)     shift when either > h
 *
 * σ is the scatter from one pair to the next. Errors that do not vary, or fewer than two, are one run.
 *
 * Source: Page, Biometrika 41 (1954) 100, for the sums; run lengths of k = 0.5, h = 4 after Montgomery, Introduction to Statistical Quality
 * Control (from memory).
 */
export function runsOf(errors: readonly number[]): Run[] {
  if (errors.length === 0) return [];
  const sigma = shortTermSigma(errors);
  const starts = sigma > 0 ? [0, ...shifts(errors, sigma)] : [0];
  const runs = starts.map((first, i) => ({ first, last: (starts[i + 1] ?? errors.length) - 1 }));
  return merged(runs, errors);
}

/** Where a new level begins, by index; never 0. */
function shifts(errors: readonly number[], sigma: number): number[] {
  const found: number[] = [];
  let level = 0;
  let start = 0;
  let up = { sum: 0, since: 0 };
  let down = { sum: 0, since: 0 };
  errors.forEach((e, i) => {
    const away = Math.max(-mostAway, Math.min(mostAway, (e - level) / sigma));
    up = cumulated(up, away, i);
    down = cumulated(down, -away, i);
    if (up.sum <= h && down.sum <= h) {
      if (found.length > 0) level = mean(errors.slice(start, i + 1));
      return;
    }
    start = up.sum > h ? up.since : down.since;
    if (start > 0) found.push(start);
    level = mean(errors.slice(start, i + 1));
    up = { sum: 0, since: i + 1 };
    down = up;
  });
  return [...new Set(found)];
}

function cumulated(side: { sum: number; since: number }, away: number, i: number): { sum: number; since: number } {
  const sum = Math.max(0, side.sum + away - k);
  return sum === 0 ? { sum, since: i + 1 } : { sum, since: side.since };
}

/** Neighbours are joined where a t-test cannot tell their levels apart, or one of them is a single pair. */
function merged(runs: readonly Run[], errors: readonly number[]): Run[] {
  const out: Run[] = [];
  for (const run of runs) {
    const before = out.at(-1);
    if (before && !differ(errorsOf(before, errors), errorsOf(run, errors)))
      out[out.length - 1] = { ...before, last: run.last };
    else out.push(run);
  }
  return out;
}

export function errorsOf({ first, last }: Run, errors: readonly number[]): number[] {
  return errors.slice(first, last + 1);
}

/** Welch's test of two means. */
function differ(a: readonly number[], b: readonly number[]): boolean {
  if (a.length < 2 || b.length < 2) return false;
  const [one, other] = [biasTest(a), biasTest(b)];
  const [va, vb] = [one.sep ** 2 / a.length, other.sep ** 2 / b.length];
  if (!(va + vb > 0)) return one.bias !== other.bias;
  const freedom = (va + vb) ** 2 / (va ** 2 / (a.length - 1) + vb ** 2 / (b.length - 1));
  return tTails((one.bias - other.bias) / Math.sqrt(va + vb), freedom) < differAt;
}
