/** Failed sign-ins of one name from one address. */
export interface Failures {
  count: number;
  /** no further try before then, epoch ms */
  until: number;
}

/** Tries that are free; from then on each failure doubles the wait, up to the longest. */
const free = 4;
const firstWaitMs = 2_000;
const longestWaitMs = 15 * 60_000;

/** The failures after one more. Pure. */
export function afterFailure(before: Failures | undefined, now: number): Failures {
  const count = (before?.count ?? 0) + 1;
  const wait = count <= free ? 0 : Math.min(longestWaitMs, firstWaitMs * 2 ** (count - free - 1));
  return { count, until: now + wait };
}

/** How long the next try must still wait, ms; 0 when it may go on. */
export function waitLeft(failures: Failures | undefined, now: number): number {
  return Math.max(0, (failures?.until ?? 0) - now);
}
