import { afterEach, beforeEach, describe, expect, test } from "vitest";
import type { LimitSet } from "../../core/limit-set/index.ts";
import type { Excursion } from "../../core/messages/index.ts";
import type { StoreReader, StoreWriter } from "../../server/store/store.ts";
import { labResult } from "../core/judging/small-stream.ts";
import { changes, event, type Maker, makers, modelId, names, reading, stateWith, stream } from "./store-record.ts";

const time = Date.UTC(2026, 4, 14, 18, 42, 7);

/** What every maker of the record owes the engine and the gateway (server/store/store.ts). */
describe.each(makers)("the record by $name", ({ place }) => {
  let at: ReturnType<Maker["place"]>;
  let writer: StoreWriter;
  let reader: StoreReader;
  const reopen = () => {
    writer.close();
    reader.close();
    writer = at.writer();
    reader = at.reader();
  };

  beforeEach(() => {
    at = place();
    writer = at.writer();
    reader = at.reader();
    writer.addModel({ id: modelId, name: "first", properties: names, text: '{"a":1}' });
  });
  afterEach(() => {
    writer.close();
    reader.close();
    at.remove();
  });

  test("is empty at first, and says so of every question", () => {
    expect(writer.state(stream)).toBeUndefined();
    expect(writer.lastCursor()).toBe(0);
    expect(writer.isRecorded(stream, time, 1)).toBe(false);
    expect(writer.limitSet(stream)).toBeUndefined();
    expect(writer.firstLive(stream)).toBeUndefined();
    expect(reader.readingBefore(stream, time)).toBeUndefined();
    expect(reader.timeAfter(stream, 0)).toBeUndefined();
    expect(reader.events({ limit: 10 })).toEqual([]);
    expect(reader.excursions({ limit: 10 })).toEqual([]);
    expect(reader.refusals(undefined, 10)).toEqual({ totals: [], latest: [] });
    expect(reader.limitSet(stream)).toBeUndefined();
    expect(reader.modelText("none")).toBeUndefined();
    expect(reader.extent(stream)).toEqual({ readings: 0, first: null });
    expect(reader.trend(stream, names, 0, time, 100)).toMatchObject({ whole: true, time: [], gaps: [] });
  });

  test("gives a reading back exactly, spectrum with its bits, axis and all, also to who opens it later", () => {
    const axis = { unit: "nm" as const, start: 1000, step: 4, count: 3 };
    const values = Float64Array.of(-0, 0.1, Number.NaN); // 0.1 needs all 64 bits
    const odd = { properties: { ethanol: { value: null, uncertainty: null }, water: { value: -1, uncertainty: 2 } } };
    writer.commit(changes({ readings: [reading(time, odd, { values, axis, late: true })] }));
    for (let round = 0; round < 2; round++) {
      const stored = reader.readingBefore(stream, time)!;
      expect(stored).toEqual({
        ...{ judged: reading(time, odd).judged, receivedAt: time + 5, late: true, history: false, axis },
        values,
      });
      expect(Object.is(stored.values![0], -0)).toBe(true);
      reopen();
    }
  });

  test("keeps one reading for each (stream, time, sequence), in one commit and over commits", () => {
    const other = reading(time, { sequence: 2 });
    writer.commit(changes({ readings: [reading(time), reading(time), other] }));
    writer.commit(changes({ readings: [reading(time, { t2: 99 })] }));
    expect(reader.extent(stream).readings).toBe(2);
    expect(reader.trend(stream, names, time, time + 1, 1).count).toEqual([2]);
    expect(writer.isRecorded(stream, time, 1)).toBe(true);
    expect(writer.isRecorded(stream, time, 3)).toBe(false);
  });

  test("finds the reading at, before and after a moment", () => {
    writer.commit(changes({ readings: [reading(time), reading(time + 10), reading(time + 20)] }));
    expect(reader.readingBefore(stream, time + 19)?.judged.time).toBe(time + 10);
    expect(reader.readingBefore(stream, time + 10)?.judged.time).toBe(time + 10);
    expect(reader.readingBefore(stream, time + 10, "strictly")?.judged.time).toBe(time);
    expect(reader.readingBefore(stream, time - 1)).toBeUndefined();
    expect(reader.timeAfter(stream, time)).toBe(time + 10);
    expect(reader.timeAfter(stream, time + 20)).toBeUndefined();
    expect(reader.readingBefore("another", time)).toBeUndefined();
  });

  test("takes all of a commit or nothing of it", () => {
    writer.commit(changes({ events: [event(1)] }));
    const broken = changes({
      readings: [reading(time)],
      refusals: [{ stream, topic: "t", receivedAt: time, reason: "late", says: "too late", payload: Buffer.from("x") }],
      states: stateWith({ same: 7 }),
      events: [event(2), event(1)], // the cursor is taken
    });
    expect(() => writer.commit(broken)).toThrow();
    expect(reader.extent(stream).readings).toBe(0);
    expect(reader.events({ limit: 10 })).toEqual([event(1)]);
    expect(reader.refusals(undefined, 10).totals).toEqual([]);
    expect(writer.state(stream)?.same).not.toBe(7);
    // And it goes on: the same readings come again and are taken once.
    writer.commit(changes({ readings: [reading(time)], events: [event(2)] }));
    expect(reader.trend(stream, names, time - 3_600_000 * 100, time + 3_600_000 * 100, 1).count).toEqual([1]);
  });

  test("keeps what judging remembers, the newest of each stream", () => {
    writer.commit(changes({ states: stateWith({ same: 1 }) }));
    writer.commit(changes({ states: stateWith({ same: 2, unusable: [0, 1] }) }));
    reopen();
    expect(writer.state(stream)).toMatchObject({ same: 2, unusable: [0, 1] });
    expect(writer.state("another")).toBeUndefined();
  });

  test("gives events newest first, by stream and between cursors, and goes on with the last cursor", () => {
    const all = [1, 2, 3, 4].map((cursor) => event(cursor, cursor === 3 ? { stream: null } : {}));
    writer.commit(changes({ events: all }));
    reopen();
    expect(writer.lastCursor()).toBe(4);
    expect(reader.events({ limit: 2 }).map(({ cursor }) => cursor)).toEqual([4, 3]);
    expect(reader.events({ stream, limit: 9 }).map(({ cursor }) => cursor)).toEqual([4, 2, 1]);
    expect(reader.events({ after: 1, before: 4, limit: 9 })).toEqual([all[2], all[1]]);
  });

  test("an excursion that grows and ends stays one, found by the time it touches", () => {
    const began: Excursion = {
      ...{ id: "s-1/unfamiliar/100", stream, kind: "unfamiliar", start: 100, peak: 2, peakTime: 100, mean: 2 },
      ...{ unit: "× limit", readings: 2, says: "something" },
    };
    writer.commit(changes({ excursions: [began] }));
    expect(reader.excursions({ from: 5000, limit: 9 })).toEqual([began]); // open: it reaches into any later time
    const over = { ...began, readings: 5, end: 200, ended: "returned" as const };
    writer.commit(changes({ excursions: [over] }));
    expect(reader.excursions({ limit: 9 })).toEqual([over]);
    expect(reader.excursions({ from: 201, limit: 9 })).toEqual([]);
    expect(reader.excursions({ to: 100, limit: 9 })).toEqual([]);
    expect(reader.excursions({ stream: "another", limit: 9 })).toEqual([]);
    expect(reader.excursionsBeside(over.stream, over.start)).toEqual({ previous: null, next: null });
    expect(reader.excursionsBeside(over.stream, over.start + 1)).toEqual({ previous: over.start, next: null });
    expect(reader.excursionsBeside(over.stream, over.start - 1)).toEqual({ previous: null, next: over.start });
    expect(reader.excursionsBeside("another", over.start + 1)).toEqual({ previous: null, next: null });
  });

  test("counts refusals by stream and reason; the same message again is one entry with a count", () => {
    const refusal = {
      stream,
      topic: "p/s-1",
      receivedAt: 10,
      reason: "malformed",
      says: "no JSON",
      payload: Buffer.from("{"),
    };
    const nobodys = { ...refusal, stream: null, topic: "p/x", reason: "unknown stream" };
    writer.commit(changes({ refusals: [refusal, { ...refusal, receivedAt: 20 }, nobodys] }));
    expect(reader.refusals(undefined, 9).totals).toEqual([
      { stream: "", reason: "unknown stream", count: 1 },
      { stream, reason: "malformed", count: 2 },
    ]);
    expect(reader.refusals(stream, 9).latest).toMatchObject([{ stream, receivedAt: 10, lastAt: 20, count: 2 }]);
    expect(reader.refusals(undefined, 1).latest).toHaveLength(1);
  });

  test("keeps every version of a limit set and the text of every model", () => {
    const set = { format: "millrace-limit-set", stream, version: 1, model: modelId } as LimitSet;
    writer.addLimitSet(set);
    writer.addLimitSet({ ...set, version: 2 });
    expect(writer.limitSet(stream)?.version).toBe(2);
    expect(reader.limitSet(stream)?.version).toBe(2);
    expect(reader.limitSet(stream, 1)?.version).toBe(1);
    expect(() => writer.addLimitSet(set)).toThrow();
    writer.addModel({ id: modelId, name: "again", properties: [], text: "another text" });
    expect(reader.modelText(modelId)).toBe('{"a":1}');
  });

  test("retires old spectra step by step, but those in excursions, and loses no result", () => {
    const times = Array.from({ length: 100 }, (_, i) => time + 1000 * i);
    const values = (at: number) => Float64Array.of(at - time, 1);
    writer.commit(
      changes({
        readings: times.map((at) => reading(at, {}, { values: values(at) })),
        excursions: [
          {
            ...{ id: "x", stream, kind: "unfamiliar", start: times[10], end: times[19], ended: "returned" },
            ...{ peak: 2, peakTime: times[12], mean: 2, unit: "× limit", readings: 10, says: "" },
          },
        ],
      }),
    );
    const kept = () => times.filter((at) => reader.readingBefore(stream, at)!.values !== null);
    expect(writer.retireSpectra(stream, times[50], 30)).toBe(true);
    reopen();
    expect(writer.retireSpectra(stream, times[50], 30)).toBe(false);
    expect(writer.retireSpectra(stream, times[50], 30)).toBe(false);
    expect(kept()).toEqual([...times.slice(10, 20), ...times.slice(50)]);
    expect(reader.extent(stream).readings).toBe(100);
    expect(reader.readingBefore(stream, times[0])!.judged).toEqual(reading(times[0]).judged);
    // Older ones that are loaded later have their turn, too.
    const loaded = [time - 5000, time - 4000].map((at) => reading(at, {}, { history: true }));
    writer.commit(changes({ readings: loaded }));
    while (writer.retireSpectra(stream, times[50], 30));
    expect(reader.readingBefore(stream, time - 5000)!.values).toBeNull();
    // With every old one gone, a new reading still gets a spectrum of its own.
    while (writer.retireSpectra(stream, times[99] + 1, 30));
    reopen();
    writer.commit(changes({ readings: [reading(times[99] + 1000, {}, { values: Float64Array.of(7) })] }));
    expect(reader.readingBefore(stream, times[99] + 1000)!.values).toEqual(Float64Array.of(7));
    expect(reader.readingBefore(stream, times[60])!.values).toBeNull();
  });

  test("knows the first reading that came in live", () => {
    writer.commit(
      changes({ readings: [reading(time, {}, { history: true }), reading(time + 10), reading(time + 20)] }),
    );
    expect(writer.firstLive(stream)).toBe(time + 10);
    expect(reader.extent(stream)).toEqual({ readings: 3, first: time });
  });

  test("keeps every version of a laboratory result, and gives the newest", () => {
    const first = labResult(time, 7.2, { stream, method: "titration", sample: "L-1" });
    const second = { ...first, version: 2, value: 7.3 };
    const other = labResult(time, 7.4, { stream, sample: "L-2" });
    const later = labResult(time + 1000, 50, { stream, property: "ethanol" });
    writer.commit(changes({ labResults: [first, other, later, { ...first, stream: "s-2" }] }));
    writer.commit(changes({ labResults: [second] }));
    reopen();
    expect(writer.labResult(stream, first)).toEqual(second);
    expect(writer.labResult(stream, { ...first, sample: "L-3" })).toBeUndefined();
    const all = { stream, from: time, to: time + 1001 };
    expect(reader.labResults(all)).toEqual([later, second, other]); // newest sample first, then by name
    expect(reader.labResults({ ...all, property: "ethanol" })).toEqual([later]);
    expect(reader.labResults({ ...all, to: time + 1000 })).toEqual([second, other]);
    expect(() => writer.commit(changes({ labResults: [second] }))).toThrow(); // a version is written once
  });

  test("finds the readings about a moment, both ends included, with their spectra", () => {
    writer.commit(changes({ readings: [0, 1, 2, 3].map((i) => reading(time + i * 1000, { sequence: i })) }));
    const found = writer.readingsBetween(stream, time + 1000, time + 2000);
    expect(found.map(({ judged }) => judged.time)).toEqual([time + 1000, time + 2000]);
    expect(found[0].values).toEqual(Float64Array.of(0.5, 0.1, Number.NaN));
    expect(writer.readingsBetween(stream, time + 3001, time + 9000)).toEqual([]);
  });
});
