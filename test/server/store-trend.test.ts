import Database from "better-sqlite3";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { type Judged, type Trend, type Verdict, verdictMask } from "../../core/messages/index.ts";
import { seededRandom } from "../../core/pls/index.ts";
import type { NewReading } from "../../server/store/store.ts";
import { changes, type Maker, makers, modelId, names, reading, stream } from "./store-record.ts";

const random = seededRandom(7);
const begin = Date.UTC(2026, 2, 28, 22, 17, 3);
const minute = 60_000;
const hour = 60 * minute;
const otherModel = "b".repeat(64);

/** Ten days of readings at uneven times, with gaps, late ones, odd ones, another model half-way, and stretches that nothing scored. */
function record(): NewReading[] {
  const readings: NewReading[] = [];
  let time = begin;
  for (let i = 0; i < 6000; i++) {
    const gap = random() < 0.005;
    const before = time;
    time += 1 + Math.floor(random() * (gap ? 20 * hour : 4 * minute));
    const scored = random() > 0.02;
    const model = time < begin + 120 * hour ? modelId : otherModel;
    const value = (scale: number) => (random() < 0.01 ? null : scale * random());
    const verdict: Verdict[] = random() < 0.02 ? ["unfamiliar", "extrapolated"] : ["inside"];
    const judged: Partial<Judged> = {
      sequence: i,
      model: scored || random() < 0.5 ? model : null,
      properties: {
        ethanol: { value: value(100), uncertainty: value(1) },
        [model === modelId ? "water" : "acetate"]: { value: value(10), uncertainty: value(2) },
      },
      ratios: { t2: scored ? random() * 2 : null, q: scored ? random() * 3 : null, nearest: null },
      verdict: scored ? verdict : ["unusable"],
    };
    readings.push(reading(time, judged, { gapFrom: gap ? before : null, values: Float64Array.of(1) }));
  }
  return readings;
}

/** The same, reading by reading from the list: slow and plain. */
function trendOf(readings: readonly NewReading[], from: number, to: number, widthMs: number) {
  const slots = new Map<string, Judged[]>();
  for (const { judged } of readings) {
    if (judged.time < from || judged.time >= to) continue;
    const slot = widthMs === 0 ? `${judged.time} ${judged.sequence}` : String(Math.floor(judged.time / widthMs));
    slots.set(slot, [...(slots.get(slot) ?? []), judged]);
  }
  const intervals = [...slots.values()];
  const column = (pick: (judged: Judged) => number | null | undefined, join: (found: number[]) => number) =>
    intervals.map((inside) => {
      const found = inside.map(pick).filter((value) => value !== null && value !== undefined);
      return found.length > 0 ? join(found) : null;
    });
  const mean = (found: number[]) => found.reduce((sum, value) => sum + value, 0) / found.length;
  const most = (found: number[]) => Math.max(...found);
  const scored = (judged: Judged, name: string) => (judged.model === null ? undefined : judged.properties[name]);
  return {
    time: intervals.map((inside) => Math.round((inside[0].time + inside[inside.length - 1].time) / 2)),
    count: intervals.map((inside) => inside.length),
    verdict: intervals.map((inside) => inside.reduce((mask, judged) => mask | verdictMask(judged.verdict), 0)),
    gaps: readings
      .filter(({ judged: { time }, gapFrom }) => gapFrom !== null && time >= from && gapFrom < to && time < to)
      .map(({ judged: { time }, gapFrom }) => [gapFrom, time]),
    properties: Object.fromEntries(
      [...names, "acetate"].map((name) => [
        name,
        {
          mean: intervals.map((all) => {
            // What was not inside stays out of a mean, unless it is all there is.
            const values = (some: Judged[]) => some.flatMap((judged) => scored(judged, name)?.value ?? []);
            const trusted = values(all.filter(({ verdict }) => verdict[0] === "inside"));
            const found = trusted.length > 0 ? trusted : values(all);
            return found.length > 0 ? mean(found) : null;
          }),
          min: column(
            (judged) => scored(judged, name)?.value,
            (found) => Math.min(...found),
          ),
          max: column((judged) => scored(judged, name)?.value, most),
          uncertainty: column((judged) => scored(judged, name)?.uncertainty, mean),
        },
      ]),
    ),
    t2: { max: column((judged) => judged.ratios.t2, most), mean: column((judged) => judged.ratios.t2, mean) },
    q: { max: column((judged) => judged.ratios.q, most), mean: column((judged) => judged.ratios.q, mean) },
  };
}

/** Means may differ in the last digits: the order of adding is another. All else is the same to the bit. */
function expectSame(trend: Trend, expected: ReturnType<typeof trendOf>, what: string): void {
  const close = (got: (number | null)[], wanted: (number | null)[], where: string) => {
    expect(got.length, where).toBe(wanted.length);
    got.forEach((value, i) => {
      const other = wanted[i];
      if (value === null || other === null) expect(value, `${where}[${i}]`).toBe(other);
      else if (Math.abs(value - other) > 1e-12 * Math.abs(other)) expect(value, `${where}[${i}]`).toBe(other);
    });
  };
  expect(trend.time, what).toEqual(expected.time);
  expect(trend.count, what).toEqual(expected.count);
  expect(trend.verdict, what).toEqual(expected.verdict);
  expect(trend.t2.max, what).toEqual(expected.t2.max);
  expect(trend.q.max, what).toEqual(expected.q.max);
  close(trend.t2.mean, expected.t2.mean, `${what}: t2.mean`);
  close(trend.q.mean, expected.q.mean, `${what}: q.mean`);
  for (const [name, { mean, min, max, uncertainty }] of Object.entries(expected.properties)) {
    expect(trend.properties[name].min, `${what}: ${name}.min`).toEqual(min);
    expect(trend.properties[name].max, `${what}: ${name}.max`).toEqual(max);
    close(trend.properties[name].mean, mean, `${what}: ${name}.mean`);
    close(trend.properties[name].uncertainty, uncertainty, `${what}: ${name}.uncertainty`);
  }
  const inWindow = trend.gaps.filter(([, end]) => end < trend.to);
  expect(inWindow, what).toEqual(expected.gaps);
}

describe.each(makers)("a trend by $name", ({ name, place }) => {
  const readings = record();
  const last = readings[readings.length - 1].judged.time;
  let at: ReturnType<Maker["place"]>;

  beforeAll(() => {
    at = place();
    const writer = at.writer();
    writer.addModel({ id: modelId, name: "first", properties: names, text: "{}" });
    writer.addModel({ id: otherModel, name: "second", properties: ["acetate", "ethanol"], text: "{}" });
    // In portions whose order is not that of time, some twice: late readings and repeats find their roll-ups again.
    for (let i = 0, most = 1; i < readings.length; i += most) {
      most = 1 + Math.floor(random() * 60);
      const mixed = readings.slice(i, i + most).toSorted(() => random() - 0.5);
      writer.commit(changes({ readings: mixed }));
      if (random() < 0.1) writer.commit(changes({ readings: mixed.slice(0, 5) }));
    }
    writer.close();
  });
  afterAll(() => at.remove());

  test.each([1, 2, 7, 50, 400, 2000])(
    "in at most %i intervals is what its readings give one by one, in any window",
    (points) => {
      const reader = at.reader();
      const widths = new Set<number>();
      for (let i = 0; i < 30; i++) {
        const from = begin + Math.floor(random() * (last - begin));
        const to = from + 1 + Math.floor(random() ** 3 * (last - from + 3 * hour));
        const trend = reader.trend(stream, [...names, "acetate"], from, to, points);
        if (!trend.whole) {
          expect(trend.time.length).toBeLessThanOrEqual(Math.max(2, points));
          widths.add(trend.widthMs % hour === 0 ? hour : trend.widthMs % minute === 0 ? minute : 1);
        }
        expectSame(trend, trendOf(readings, from, to, trend.widthMs), `${from}–${to} in ${points}`);
      }
      // The window's own readings decide, so that the comparison is no empty one: few points are made of hours, many of minutes or readings.
      if (points <= 50) expect(widths).toContain(hour);
      if (points >= 50) expect(widths).toContain(minute);
      reader.close();
    },
  );

  test("over everything keeps the largest and the smallest reading, and every gap", () => {
    const reader = at.reader();
    const trend = reader.trend(stream, names, begin, last + 1, 20);
    const values = readings.flatMap(({ judged }) => (judged.model ? [judged.properties.ethanol.value] : []));
    const found = values.filter((value) => value !== null);
    expect(Math.max(...trend.properties.ethanol.max.map((value) => value ?? 0))).toBe(Math.max(...found));
    expect(Math.min(...trend.properties.ethanol.min.map((value) => value ?? 100))).toBe(Math.min(...found));
    expect(trend.gaps).toHaveLength(readings.filter(({ gapFrom }) => gapFrom !== null).length);
    reader.close();
  });

  test.runIf(name === "SQLite")(
    "a record of the form before roll-ups is brought up to date, with the same trends",
    () => {
      const reader = at.reader();
      const before = reader.trend(stream, names, begin, last, 100);
      expect(before.widthMs % hour).toBe(0);
      reader.close();
      const db = new Database(at.file);
      backBeforeRehearsals(db);
      db.exec("DROP TRIGGER event_stays; DROP TRIGGER event_is_kept; ALTER TABLE event DROP COLUMN hash");
      db.exec("DROP TABLE rollup; DROP INDEX reading_after_gap; DROP TABLE retired; PRAGMA user_version = 1");
      db.close();
      expect(() => at.reader()).toThrow(/is a record of form 1, expected form \d+\. Start the service once/);
      at.writer().close();
      const again = at.reader();
      expectSame(
        again.trend(stream, [...names, "acetate"], begin, last, 100),
        trendOf(readings, begin, last, before.widthMs),
        "upgraded",
      );
      again.close();
    },
  );

  test.runIf(name === "SQLite")("roll-ups of the form before are made anew, not read as the present ones", () => {
    const db = new Database(at.file);
    backBeforeRehearsals(db);
    db.exec("UPDATE rollup SET numbers = zeroblob(96); PRAGMA user_version = 4");
    db.close();
    at.writer().close();
    const reader = at.reader();
    const trend = reader.trend(stream, [...names, "acetate"], begin, last, 100);
    expectSame(trend, trendOf(readings, begin, last, trend.widthMs), "made anew");
    reader.close();
  });
});

/** Takes away what came after form 5, which had these tables and no others. */
function backBeforeRehearsals(db: Database.Database): void {
  const then =
    "stream model limit_set axis reading spectrum event excursion refusal refusal_total rollup retired".split(" ");
  const tables = () =>
    db
      .prepare<[], string>(
        "SELECT name FROM sqlite_schema WHERE type = 'table' AND name NOT LIKE 'sqlite_%' ORDER BY sql LIKE 'CREATE VIRTUAL%' DESC",
      )
      .pluck()
      .all()
      .filter((table) => !then.includes(table));
  db.pragma("foreign_keys = OFF");
  for (const trigger of db
    .prepare<[], string>(
      "SELECT name FROM sqlite_schema WHERE type = 'trigger' AND name NOT IN ('event_stays', 'event_is_kept')",
    )
    .pluck()
    .all()) {
    db.exec(`DROP TRIGGER ${trigger}`);
  }
  // A virtual table takes its own tables with it.
  for (let [table] = tables(); table !== undefined; [table] = tables()) db.exec(`DROP TABLE "${table}"`);
  db.exec(
    "DROP INDEX process_state; DROP INDEX event_by_time; DROP INDEX event_by_kind; ALTER TABLE reading DROP COLUMN unusable_reason",
  );
}
