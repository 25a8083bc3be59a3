/** A time in which alarms came faster than a person can deal with them; epoch ms. */
export interface Flood {
  start: number;
  /** null: not over yet */
  end: number | null;
  annunciations: number;
  /** most in any 10 minutes of it */
  peak: number;
}

export const floodWindowMs = 10 * 60_000;
/** Begins when more than this many alarms came within 10 minutes … */
export const floodBeginsAbove = 10;
/** … and ends when fewer than this many did. */
export const floodEndsBelow = 5;

/**
 * Floods among the times of annunciations (ascending): in a sliding window of 10 minutes, (t − 10 min, t].
 *
 * Definition: ISA-18.2-2009, also in IEC 62682: begins above 10 new alarms in 10 min, ends below 5 in 10 min.
 *
 * @param until where the record ends; a flood that would go on beyond it has no end
 */
export function floodsIn(times: readonly number[], until: number): Flood[] {
  const floods: Flood[] = [];
  let first = 0; // of the window
  for (let i = 0; i < times.length; i++) {
    while (times[first] <= times[i] - floodWindowMs) first++;
    if (i - first + 1 <= floodBeginsAbove) continue;
    const last = lastOf(times, i);
    const end = times[last - floodEndsBelow + 1] + floodWindowMs;
    floods.push({
      start: times[i],
      end: end < until ? end : null,
      // All that made it, those that came before it was one, too.
      annunciations: last - first + 1,
      peak: mostWithin(times.slice(first, last + 1), floodWindowMs),
    });
    i = last;
  }
  return floods;
}

/** The last annunciation of the flood that reading `i` began: after it fewer than five are left in the window before the next one comes. `i` has ten before it. */
function lastOf(times: readonly number[], i: number): number {
  let last = i;
  while (last + 1 < times.length && times[last + 1] <= times[last - floodEndsBelow + 1] + floodWindowMs) last++;
  return last;
}

/** The most of these times (ascending) within any stretch of `windowMs`: a sliding window. */
export function mostWithin(times: readonly number[], windowMs: number): number {
  let most = 0;
  for (let first = 0, i = 0; i < times.length; i++) {
    while (times[first] <= times[i] - windowMs) first++;
    most = Math.max(most, i - first + 1);
  }
  return most;
}
