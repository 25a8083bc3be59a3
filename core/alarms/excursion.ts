import type { Excursion, Region } from "../messages/index.ts";

/** What one reading adds to an excursion: how far it is beyond the limit (larger is further), and the number to show for it. */
export interface Beyond {
  at: number;
  /** larger is further out; compared, never shown */
  reach: number;
  /** the ratio to the limit, or the property's value */
  shown: number;
  unit: string;
}

/** Where on the axis an excursion differs, and the sentence that says so. */
export interface Account {
  says: string;
  regions: Region[];
}

/** A run of readings beyond one limit. Plain data; kept in the store. */
export interface OpenExcursion extends Account {
  start: number;
  /** the last reading beyond the limit */
  last: number;
  /** readings beyond the limit */
  readings: number;
  /** readings since, in a row, that were not */
  within: number;
  sum: number;
  peak: number;
  peakReach: number;
  peakTime: number;
  unit: string;
  /** contributions of all its readings together, by place on the axis; empty where there are none */
  made: number[];
  /** alarms that stood for it during it */
  alarms: { key: string; raisedAt: number }[];
  label?: Excursion["label"];
  notes?: Excursion["notes"];
}

/** A single reading beyond a limit is a verdict; from this many in a row on it is an excursion. */
export const excursionFrom = 2;
/** With fewer readings than this between them, two excursions are one: a statistic that hovers at its limit tells one story. */
export const apartFrom = 3;
/** The account of what made an excursion is brought up to date at each new peak, after so many readings, and at its end. */
const accountEvery = 16;

/**
 * One more reading beyond the limit.
 *
 * @param made contributions of this reading by place on the axis, as many as before (else they begin anew: another model is in charge)
 * @param account makes words and regions of the contributions so far; asked now and then only
 */
export function extend(
  open: OpenExcursion | undefined,
  beyond: Beyond,
  made: ArrayLike<number>,
  account: (made: readonly number[]) => Account,
): OpenExcursion {
  const { at, reach, shown, unit } = beyond;
  const sums = Array.from(made, (value, i) => value + (open?.made.length === made.length ? open.made[i] : 0));
  const peak = { peak: shown, peakReach: reach, peakTime: at };
  if (!open) {
    const first = { start: at, last: at, readings: 1, within: 0, sum: shown, unit, made: sums, alarms: [] };
    return { ...first, ...peak, ...account(sums) };
  }
  const readings = open.readings + 1;
  const further = reach > open.peakReach;
  return {
    ...open,
    last: at,
    readings,
    within: 0,
    sum: open.sum + shown,
    made: sums,
    ...(further ? peak : {}),
    ...(further || readings % accountEvery === 0 ? account(sums) : {}),
  };
}

/** The excursion as it is shown and recorded. */
export function excursionOf(stream: string, kind: string, open: OpenExcursion, ended?: "returned" | "gap"): Excursion {
  const { start, last, peak, peakTime, sum, readings, unit, says, regions, alarms, label, notes } = open;
  return {
    id: excursionId(stream, kind, start),
    stream,
    kind,
    start,
    ...(ended ? { end: last, ended } : {}),
    peak,
    peakTime,
    mean: sum / readings,
    unit,
    readings,
    says,
    ...(regions.length > 0 ? { regions } : {}),
    ...(alarms.length > 0 ? { alarms } : {}),
    ...(label ? { label } : {}),
    ...(notes ? { notes } : {}),
  };
}

export function excursionId(stream: string, kind: string, start: number): string {
  return `${stream}/${kind}/${start}`;
}
