import type Database from "better-sqlite3";
import type { Trend } from "../../../core/messages/index.ts";

type Row = [
  time: number,
  verdict: number,
  t2: number | null,
  q: number | null,
  properties: Buffer,
  model: number | null,
  gapFrom: number | null,
];
type ModelOf = (k: number | null) => { properties: string[] } | undefined;

/** One interval under way. */
class Interval {
  count = 0;
  verdict = 0;
  first = 0;
  last = 0;
  readonly t2 = new Spread();
  readonly q = new Spread();
  readonly values: Spread[];
  readonly uncertainties: Spread[];

  constructor(properties: number) {
    this.values = Array.from({ length: properties }, () => new Spread());
    this.uncertainties = Array.from({ length: properties }, () => new Spread());
  }
}

class Spread {
  n = 0;
  sum = 0;
  min = Number.POSITIVE_INFINITY;
  max = Number.NEGATIVE_INFINITY;

  add(value: number): void {
    this.n++;
    this.sum += value;
    if (value < this.min) this.min = value;
    if (value > this.max) this.max = value;
  }
  get mean(): number | null {
    return this.n > 0 ? this.sum / this.n : null;
  }
  get least(): number | null {
    return this.n > 0 ? this.min : null;
  }
  get most(): number | null {
    return this.n > 0 ? this.max : null;
  }
}

/** The trend of one stream, read row by row. Minimum and maximum of every interval are kept, so no single reading vanishes in a long view. */
export function trendQuery(db: Database.Database, modelOf: ModelOf) {
  const count = db
    .prepare<[number, number, number], number>(
      "SELECT count(*) FROM reading WHERE stream = ? AND time >= ? AND time < ?",
    )
    .pluck();
  const rows = db
    .prepare<[number, number, number], Row>(
      "SELECT time, verdict, t2_ratio, q_ratio, properties, model, gap_from FROM reading WHERE stream = ? AND time >= ? AND time < ? ORDER BY time",
    )
    .raw();
  const nextGap = db
    .prepare<[number, number], [number | null, number]>(
      "SELECT gap_from, time FROM reading WHERE stream = ? AND time >= ? ORDER BY time LIMIT 1",
    )
    .raw();

  return function trend(
    stream: string,
    key: number,
    properties: readonly string[],
    from: number,
    to: number,
    points: number,
  ): Trend {
    const total = count.get(key, from, to) ?? 0;
    const whole = total <= points;
    const widthMs = whole ? 0 : Math.max(1, Math.ceil((to - from) / points));
    const out = emptyTrend(stream, properties, from, to, whole, widthMs);
    let interval: Interval | undefined;
    let slot = -1;
    for (const [time, verdict, t2, q, bytes, model, gapFrom] of rows.iterate(key, from, to)) {
      if (gapFrom !== null) out.gaps.push([gapFrom, time]);
      const here = whole ? time : Math.floor((time - from) / widthMs);
      if (!interval || here !== slot) {
        if (interval) close(out, properties, interval);
        interval = new Interval(properties.length);
        interval.first = time;
        slot = here;
      }
      interval.last = time;
      interval.count++;
      interval.verdict |= verdict;
      if (t2 !== null) interval.t2.add(t2);
      if (q !== null) interval.q.add(q);
      addProperties(interval, properties, bytes, modelOf(model)?.properties ?? []);
    }
    if (interval) close(out, properties, interval);
    // A gap that reaches beyond the window belongs to the first reading after it.
    const after = nextGap.get(key, to);
    if (after && after[0] !== null && after[0] < to) out.gaps.push([after[0], after[1]]);
    return out;
  };
}

function addProperties(interval: Interval, wanted: readonly string[], bytes: Buffer, names: readonly string[]): void {
  for (let i = 0; i < wanted.length; i++) {
    const at = names.indexOf(wanted[i]);
    if (at < 0) continue;
    const value = bytes.readDoubleLE(16 * at);
    const uncertainty = bytes.readDoubleLE(16 * at + 8);
    if (!Number.isNaN(value)) interval.values[i].add(value);
    if (!Number.isNaN(uncertainty)) interval.uncertainties[i].add(uncertainty);
  }
}

function emptyTrend(
  stream: string,
  properties: readonly string[],
  from: number,
  to: number,
  whole: boolean,
  widthMs: number,
): Trend {
  return {
    stream,
    from,
    to,
    whole,
    widthMs,
    gaps: [],
    time: [],
    count: [],
    verdict: [],
    properties: Object.fromEntries(properties.map((name) => [name, { mean: [], min: [], max: [], uncertainty: [] }])),
    t2: { max: [], mean: [] },
    q: { max: [], mean: [] },
  };
}

function close(out: Trend, properties: readonly string[], interval: Interval): void {
  out.time.push(Math.round((interval.first + interval.last) / 2));
  out.count.push(interval.count);
  out.verdict.push(interval.verdict);
  properties.forEach((name, i) => {
    const columns = out.properties[name];
    columns.mean.push(interval.values[i].mean);
    columns.min.push(interval.values[i].least);
    columns.max.push(interval.values[i].most);
    columns.uncertainty.push(interval.uncertainties[i].mean);
  });
  out.t2.max.push(interval.t2.most);
  out.t2.mean.push(interval.t2.mean);
  out.q.max.push(interval.q.most);
  out.q.mean.push(interval.q.mean);
}
