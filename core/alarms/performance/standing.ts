import type { Stretch } from "./annunciation.ts";

export const staleAfterMs = 24 * 3_600_000;
const day = 24 * 3_600_000;

/** Alarms whose condition held longer than a day and that were in alarm at some time of `from`–`to`. */
export function staleOf(stretches: readonly Stretch[], from: number, to: number): Stretch[] {
  return stretches.filter((stretch) => {
    const until = Math.min(stretch.until ?? to, to);
    return until >= from && stretch.since < to && until - stretch.since > staleAfterMs;
  });
}

/** The most stale alarms on any day of `from`–`to` (days of 24 h, counted from `from`). */
export function mostStaleOnADay(stretches: readonly Stretch[], from: number, to: number): number {
  let most = 0;
  for (let start = from; start < to; start += day) {
    const end = Math.min(start + day, to);
    most = Math.max(most, staleOf(stretches, start, end).length);
  }
  return most;
}

/** Alarms whose condition holds at a moment. */
export function standingAt(stretches: readonly Stretch[], at: number): Stretch[] {
  return stretches.filter(({ since, until }) => since <= at && (until === undefined || until > at));
}
