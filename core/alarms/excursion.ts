import type { Excursion } from "../messages/index.ts";

/** What one reading adds to an excursion: how far it is beyond the limit (larger is further), and the number to show for it. */
export interface Beyond {
  at: number;
  /** larger is further out; compared, never shown */
  reach: number;
  /** the ratio to the limit, or the property's value */
  shown: number;
  unit: string;
}

/** A run of readings beyond one limit. Plain data; kept in the store. */
export interface OpenExcursion {
  start: number;
  last: number;
  readings: number;
  sum: number;
  peak: number;
  peakReach: number;
  peakTime: number;
  unit: string;
  /** the wavelengths that made its peak, in words */
  says: string;
}

/** A single reading beyond a limit is a verdict; from this many in a row on it is an excursion. */
export const excursionFrom = 2;

/** One more reading beyond the limit. `describe` is asked for words only when this reading is the furthest so far. */
export function extend(open: OpenExcursion | undefined, beyond: Beyond, describe: () => string): OpenExcursion {
  if (!open) {
    return {
      start: beyond.at,
      last: beyond.at,
      readings: 1,
      sum: beyond.shown,
      peak: beyond.shown,
      peakReach: beyond.reach,
      peakTime: beyond.at,
      unit: beyond.unit,
      says: describe(),
    };
  }
  const further = beyond.reach > open.peakReach;
  return {
    ...open,
    last: beyond.at,
    readings: open.readings + 1,
    sum: open.sum + beyond.shown,
    ...(further
      ? {
          peak: beyond.shown,
          peakReach: beyond.reach,
          peakTime: beyond.at,
          says: describe(),
        }
      : {}),
  };
}

/** The excursion as it is shown and recorded. */
export function excursionOf(stream: string, kind: string, open: OpenExcursion, ended?: "returned" | "gap"): Excursion {
  return {
    id: `${stream}/${kind}/${open.start}`,
    stream,
    kind,
    start: open.start,
    ...(ended ? { end: open.last, ended } : {}),
    peak: open.peak,
    peakTime: open.peakTime,
    mean: open.sum / open.readings,
    unit: open.unit,
    readings: open.readings,
    says: open.says,
  };
}
