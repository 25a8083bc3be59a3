import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { freshState } from "../../core/judging/index.ts";
import { defaultAlarms } from "../../core/limit-set/index.ts";
import type { HandoverEntry, RecordedEvent, Verdict } from "../../core/messages/index.ts";
import { modelId } from "../../core/model/index.ts";
import { entryWords } from "../../core/shift-page/index.ts";
import { parsePlantConfig } from "../../server/config/plant-config.ts";
import { ReadingExplainer } from "../../server/gateway/reading-view.ts";
import { recordFile } from "../../server/handover/record-file.ts";
import { ShiftBook } from "../../server/handover/shift-book.ts";
import { sqliteReader } from "../../server/store/sqlite/reader.ts";
import { sqliteWriter } from "../../server/store/sqlite/writer.ts";
import type { NewReading, StoreWriter } from "../../server/store/store.ts";
import { alarm } from "../core/handover/some-record.ts";
import { smallModel } from "../core/model/small-model.ts";
import type { BenchResult } from "./bench-result.ts";

const streams = Array.from({ length: 12 }, (_, i) => `s-${i + 1}`);
const periodMs = 5000;
const hour = 3_600_000;
const begin = Date.UTC(2026, 4, 12, 6);
const most = 300;
const model = smallModel();
const id = modelId(model);
const names = model.properties.map(({ name }) => name);

const config = parsePlantConfig(
  JSON.stringify({
    ...{ site: "bench", name: "Bench", timeZone: "UTC", data: "." },
    http: { host: "127.0.0.1", port: 0 },
    mqtt: { prefix: "bench", broker: { embedded: { host: "127.0.0.1", port: 0 } } },
    shifts: {
      shifts: [
        { name: "Day", from: "06:00", to: "18:00" },
        { name: "Night", from: "18:00", to: "06:00" },
      ],
    },
    streams: streams.map((stream) => ({ id: stream, name: stream, model: "m.json", periodMs })),
  }),
  "bench.json",
);

/**
 * The record of a shift of 12 streams with a reading every 5 s and 200 alarms, and of one in which every stream hovers about a limit all the
 * time, so that no roll-up is of one kind; and a word among all that people said in a year of shifts.
 */
export function benchHandover(): BenchResult[] {
  const calm = timed((i) => (i % 2000 < 40 ? ["unfamiliar"] : ["inside"]));
  const hovering = timed((i) => (i % 2 === 0 ? ["unfamiliar"] : ["inside"]));
  return [
    ...calm("the record of a shift (12 streams, 12 h, 200 alarms)"),
    ...hovering("the same, every stream hovering about its limit").map(({ wanted: _, good: __, ...each }) => each),
    search(),
  ];
}

function timed(verdict: (i: number) => Verdict[]) {
  return (name: string): BenchResult[] =>
    withRecord((writer, open) => {
      fill(writer, verdict);
      const { book, store } = open();
      const shift = book.calendar.at(begin + 12 * hour);
      const value = median(7, () => void book.draw(shift, shift.to));
      const bound = { record: book.draw(shift, shift.to), hash: null, entries: [] };
      const page = median(5, () => void recordFile(bound, "html"));
      store.close();
      const note = `${bound.record.streams.reduce((sum, { account }) => sum + account.readings, 0)} readings, ${bound.record.alarms.annunciations} alarms`;
      return [
        { name, value, unit: "ms", wanted: `< ${most}`, good: value < most, note },
        { name: "  and its page", value: page, unit: "ms" },
      ];
    });
}

function search(): BenchResult {
  return withRecord((writer, open) => {
    const shifts = 2 * 365;
    let number = 0;
    for (let i = 0; i < shifts; i++) {
      const notes = Array.from({ length: 20 }, (_, k) => noteEvent(++number, begin + i * 12 * hour, k));
      writer.commit({ readings: [], refusals: [], events: notes, excursions: [], states: new Map() });
    }
    const { store } = open();
    const value = median(9, () => void store.handover.said("drum leak", 100));
    const { count } = store.handover.said("drum leak", 100);
    store.close();
    const note = `${count} of ${number} notes`;
    return { name: "a word in a year of shifts", value, unit: "ms", wanted: `< ${most}`, good: value < most, note };
  });
}

function withRecord<T>(
  use: (writer: StoreWriter, open: () => { book: ShiftBook; store: ReturnType<typeof sqliteReader> }) => T,
): T {
  const folder = mkdtempSync(join(tmpdir(), "millrace-shift-bench-"));
  const file = join(folder, "record.db");
  const writer = sqliteWriter(file);
  try {
    return use(writer, () => {
      const store = sqliteReader(file);
      return { store, book: new ShiftBook(config, store, new ReadingExplainer(store)) };
    });
  } finally {
    writer.close();
    rmSync(folder, { recursive: true });
  }
}

/** Two shifts of readings, and 200 alarms in the second, each raised, acknowledged and cleared. */
function fill(writer: StoreWriter, verdict: (i: number) => Verdict[]): void {
  writer.addModel({ id, name: model.name, properties: names, text: JSON.stringify(model) });
  for (const stream of streams) {
    const statistics = { t2: limit(12), q: limit(1), nearest: limit(1) };
    writer.addLimitSet({
      ...{ format: "millrace-limit-set", formatVersion: 1, stream, version: 1, model: id, statistics },
      ...{ alarms: defaultAlarms(), author: "bench", reason: "bench", time: begin },
    });
    for (let i = 0; i < (24 * hour) / periodMs; i += 4320) {
      const readings = Array.from({ length: 4320 }, (_, k) => reading(stream, i + k, verdict(i + k)));
      writer.commit({ readings, refusals: [], events: [], excursions: [], states: new Map([[stream, freshState]]) });
    }
  }
  const events = Array.from({ length: 200 }, (_, i) => alarmEvents(i)).flat();
  writer.commit({ readings: [], refusals: [], events, excursions: [], states: new Map() });
}

const limit = (value: number) => ({ method: "fixed" as const, limit: value });

function reading(stream: string, i: number, verdict: Verdict[]): NewReading {
  const time = begin + i * periodMs;
  const value = 10 + Math.sin(i / 700);
  return {
    judged: {
      ...{ stream, time, sequence: i, t2: 3, q: 1e-4, leverage: 0.1, nearest: 1, model: id, limitSet: 1, verdict },
      properties: Object.fromEntries(names.map((name) => [name, { value, uncertainty: 0.1 }])),
      ratios: { t2: 0.4, q: verdict[0] === "inside" ? 0.5 : 1.2, nearest: 0.5 },
    },
    ...{ receivedAt: time, late: false, history: false, gapFrom: null, values: Float64Array.of(0.5, 0.25) },
  };
}

function alarmEvents(i: number): RecordedEvent[] {
  const at = begin + 12 * hour + i * 200_000;
  const stream = streams[i % streams.length];
  const event = (k: number, kind: string, more: object): RecordedEvent => ({
    ...{ cursor: 3 * i + k, at: at + 30_000 * k, stream, kind: `alarm ${kind}`, says: kind },
    alarm: alarm(at, { stream, ...more }),
  });
  return [
    event(1, "raised", {}),
    { ...event(2, "acknowledged", { state: "acknowledged" }), by: "A. Moss" },
    event(3, "cleared", { state: "normal" }),
  ];
}

const said = [
  "Pump 3 sounds rough, watched.",
  "Drum 4 leaks a little.",
  "Feed tank changed over.",
  "Probe window wiped.",
];

function noteEvent(number: number, shift: number, k: number): RecordedEvent {
  const says = `${said[k % said.length]} Entry ${number}.`;
  const written: HandoverEntry = {
    number,
    shift,
    at: shift + k,
    by: "A. Moss",
    kind: "note",
    about: { kind: "shift" },
    says,
  };
  const { at, by } = written;
  return { cursor: number, at, by, stream: null, kind: "handover note", says: entryWords(written), handover: written };
}

function median(times: number, run: () => void): number {
  const took = Array.from({ length: times }, () => {
    const start = performance.now();
    run();
    return performance.now() - start;
  });
  return took.sort((a, b) => a - b)[Math.floor(times / 2)];
}
