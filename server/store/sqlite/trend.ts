import type Database from "better-sqlite3";
import type { Trend } from "../../../core/messages/index.ts";
import { rollupLevels } from "./rollup.ts";
import { Summary } from "./summary.ts";

type ReadingRow = [
  time: number,
  verdict: number,
  t2: number | null,
  q: number | null,
  numbers: Buffer,
  model: number | null,
];
type RollupRow = [first: number, last: number, count: number, verdict: number, numbers: Buffer, model: number];
type ModelOf = (k: number | null) => { properties: string[] } | undefined;

/** How a trend is made: each reading by itself, or in intervals of `widthMs` (counted from the epoch), from roll-ups where `level` names one. */
interface Plan {
  whole: boolean;
  widthMs: number;
  level: number;
}

/** The trend of one stream. Minimum and maximum of every interval are kept, so no single reading vanishes in a long view. */
export function trendQuery(db: Database.Database, modelOf: ModelOf) {
  // Counts no further than it must: a year has millions.
  const countUpTo = db
    .prepare<[number, number, number, number], number>(
      "SELECT count(*) FROM (SELECT 1 FROM reading WHERE stream = ? AND time >= ? AND time < ? LIMIT ?)",
    )
    .pluck();
  const readings = db
    .prepare<[number, number, number], ReadingRow>(
      "SELECT time, verdict, t2_ratio, q_ratio, properties, model FROM reading WHERE stream = ? AND time >= ? AND time < ? ORDER BY time",
    )
    .raw();
  const rollups = db
    .prepare<[number, number, number, number], RollupRow>(
      "SELECT first, last, count, verdict, numbers, model FROM rollup WHERE stream = ? AND level = ? AND start >= ? AND start < ? ORDER BY start",
    )
    .raw();
  const gaps = db
    .prepare<[number, number, number], [number, number]>(
      "SELECT gap_from, time FROM reading WHERE stream = ? AND time >= ? AND time < ? AND gap_from IS NOT NULL ORDER BY time",
    )
    .raw();
  const nextGap = db
    .prepare<[number, number], [number | null, number]>(
      "SELECT gap_from, time FROM reading WHERE stream = ? AND time >= ? ORDER BY time LIMIT 1",
    )
    .raw();

  function trend(
    stream: string,
    key: number,
    properties: readonly string[],
    from: number,
    to: number,
    points: number,
  ): Trend {
    const plan = planOf(from, to, points, (countUpTo.get(key, from, to, points + 1) ?? 0) <= points);
    const { whole, widthMs, level } = plan;
    const places = placesIn(properties, modelOf);
    const out = emptyTrend({ stream, from, to, whole, widthMs }, properties);
    let interval: Summary | undefined;
    let slot = Number.NaN;
    const at = (time: number): Summary => {
      const here = whole ? time : Math.floor(time / widthMs);
      if (interval && here === slot) return interval;
      if (interval) close(out, properties, interval);
      slot = here;
      interval = new Summary(properties.length);
      return interval;
    };
    const addReadings = (since: number, until: number) => {
      for (const [time, verdict, t2, q, numbers, model] of readings.iterate(key, since, until)) {
        at(time).addReading({ time, verdict, t2, q, numbers }, places(model));
      }
    };
    // Whole stretches from the roll-ups, what the window cuts off at its ends from the readings themselves.
    const head = level ? Math.ceil(from / level) * level : to;
    const tail = level ? Math.floor(to / level) * level : to;
    if (head < tail) {
      addReadings(from, head);
      for (const [first, last, count, verdict, numbers, model] of rollups.iterate(key, level, head, tail)) {
        at(first).addStretch({ first, last, count, verdict, numbers }, places(model));
      }
      addReadings(tail, to);
    } else {
      addReadings(from, to);
    }
    if (interval) close(out, properties, interval);
    out.gaps.push(...gaps.iterate(key, from, to));
    // A gap that reaches beyond the window belongs to the first reading after it.
    const after = nextGap.get(key, to);
    if (after && after[0] !== null && after[0] < to) out.gaps.push([after[0], after[1]]);
    return out;
  }
  // One transaction: a commit between the statements would be counted in one and missed in another.
  return db.transaction(trend);
}

/** The narrowest intervals that come to no more than `points`, whole stretches of the coarsest level that is not wider. */
function planOf(from: number, to: number, points: number, whole: boolean): Plan {
  if (whole) return { whole, widthMs: 0, level: 0 };
  const wanted = Math.max(1, Math.ceil((to - from) / points));
  const level = rollupLevels.findLast((width) => width <= wanted) ?? 0;
  const unit = level || 1;
  let widthMs = Math.ceil(wanted / unit) * unit;
  // A window that begins within an interval touches one more.
  while (Math.floor((to - 1) / widthMs) - Math.floor(from / widthMs) >= points && points > 1) widthMs += unit;
  return { whole, widthMs, level };
}

/** Where each wanted property stands among those of a model; −1: it has none such. */
function placesIn(properties: readonly string[], modelOf: ModelOf): (model: number | null) => readonly number[] {
  const known = new Map<number | null, readonly number[]>();
  return (model) => {
    const places = known.get(model);
    if (places) return places;
    const names = modelOf(model)?.properties ?? [];
    const found = properties.map((name) => names.indexOf(name));
    known.set(model, found);
    return found;
  };
}

function emptyTrend(
  about: Pick<Trend, "stream" | "from" | "to" | "whole" | "widthMs">,
  names: readonly string[],
): Trend {
  return {
    ...about,
    gaps: [],
    time: [],
    count: [],
    verdict: [],
    properties: Object.fromEntries(names.map((name) => [name, { mean: [], min: [], max: [], uncertainty: [] }])),
    t2: { max: [], mean: [] },
    q: { max: [], mean: [] },
  };
}

function close(out: Trend, names: readonly string[], interval: Summary): void {
  out.time.push(Math.round((interval.first + interval.last) / 2));
  out.count.push(interval.count);
  out.verdict.push(interval.verdict);
  names.forEach((name, i) => {
    const columns = out.properties[name];
    columns.mean.push(interval.mean(i));
    columns.min.push(interval.values[i].least);
    columns.max.push(interval.values[i].most);
    columns.uncertainty.push(interval.uncertainties[i].mean);
  });
  out.t2.max.push(interval.t2.most);
  out.t2.mean.push(interval.t2.mean);
  out.q.max.push(interval.q.most);
  out.q.mean.push(interval.q.mean);
}
