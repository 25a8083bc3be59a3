import { FitError } from "./fit-error.ts";

/** Which samples are held out together: every sample stands in exactly one segment. */
export type Segments = readonly (readonly number[])[];

/** One sample at a time. */
export function leaveOneOut(n: number): Segments {
  return Array.from({ length: n }, (_, i) => [i]);
}

/** Runs of neighbours: for samples that stand in order of time. */
export function contiguous(n: number, count: number): Segments {
  checkCount(n, count);
  return Array.from({ length: count }, (_, s) => range(Math.round((s * n) / count), Math.round(((s + 1) * n) / count)));
}

/** Every count-th sample: segment 0 holds samples 0, count, 2 count … */
export function interleaved(n: number, count: number): Segments {
  checkCount(n, count);
  return Array.from({ length: count }, (_, s) => range(0, n).filter((i) => i % count === s));
}

/** Shuffled, then dealt out. @param random gives numbers in [0, 1): hand in a seeded one, so that a run can be done again */
export function randomly(n: number, count: number, random: () => number): Segments {
  checkCount(n, count);
  const order = range(0, n);
  for (let i = n - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1));
    [order[i], order[j]] = [order[j], order[i]];
  }
  return interleaved(n, count).map((segment) => segment.map((i) => order[i]).sort((a, b) => a - b));
}

/** Samples of one group (a batch, a day, replicates of one bottle) are held out together. @throws FitError when there is one group only */
export function byGroup(groups: readonly string[]): Segments {
  const found = new Map<string, number[]>();
  groups.forEach((group, i) => {
    found.set(group, [...(found.get(group) ?? []), i]);
  });
  if (found.size >= 2) return Array.from(found.values());
  throw new FitError("the column group", {
    got: `${found.size} group`,
    expected: "at least 2",
    todo: "Validate with loo or folds instead.",
  });
}

function checkCount(n: number, count: number): void {
  if (Number.isInteger(count) && count >= 2 && count <= n) return;
  throw new FitError("the number of folds", {
    got: `${count}`,
    expected: `2 to ${n}, the number of samples`,
    todo: "Correct the number of folds.",
  });
}

function range(from: number, to: number): number[] {
  return Array.from({ length: to - from }, (_, i) => from + i);
}
