import { mkdtempSync, rmSync, statSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { freshState } from "../../core/judging/index.ts";
import type { Judged } from "../../core/messages/index.ts";
import { sqliteReader } from "../../server/store/sqlite/reader.ts";
import { sqliteWriter } from "../../server/store/sqlite/writer.ts";
import type { NewReading } from "../../server/store/store.ts";
import type { BenchResult } from "./bench-result.ts";

const periodMs = 5000;
const year = 365 * 24 * 3600 * 1000;
const begin = Date.UTC(2025, 0, 1);
const names = ["ethyl acetate", "ethanol", "water"];
const mostPoints = 2000;
const windows = [0.5, 1.3, 2, 7, 14, 30, 60, 83, 84, 120, 180, 365];

/** A year of one stream, a reading every 5 s: what writing it takes, and how long the trend of windows of it takes, in at most 2 000 points. */
export function benchYear(): BenchResult[] {
  const folder = mkdtempSync(join(tmpdir(), "millrace-year-"));
  const file = join(folder, "record.db");
  const writer = sqliteWriter(file);
  writer.addModel({ id: "a".repeat(64), name: "bench", properties: names, text: "{}" });
  const began = performance.now();
  let readings = 0;
  for (let time = begin; time < begin + year; ) {
    const portion: NewReading[] = [];
    for (; portion.length < 5000 && time < begin + year; time += periodMs) portion.push(reading(time, readings++));
    const states = new Map([["s", freshState]]);
    writer.commit({ readings: portion, refusals: [], events: [], excursions: [], states });
  }
  const writeMicroseconds = (1000 * (performance.now() - began)) / readings;
  writer.close();
  const reader = sqliteReader(file);
  const timed = windows.map((days): BenchResult => {
    const span = days * 24 * 3600 * 1000;
    const from = begin + Math.floor((year - span) / 2) + 1234;
    const took: number[] = [];
    let points = 0;
    for (let i = 0; i < 5; i++) {
      const start = performance.now();
      points = reader.trend("s", names, from, from + span, mostPoints).time.length;
      took.push(performance.now() - start);
    }
    const value = took.sort((a, b) => a - b)[2];
    const good = value < 150 && points <= mostPoints;
    return {
      name: `trend of ${days} days out of a year`,
      value,
      unit: "ms",
      wanted: "< 150",
      good,
      note: `${points} points`,
    };
  });
  reader.close();
  const megabytes = statSync(file).size / 1e6;
  rmSync(folder, { recursive: true });
  return [
    {
      name: "a reading committed with its roll-ups",
      value: writeMicroseconds,
      unit: "µs",
      note: `${readings} readings`,
    },
    { name: "a year without its spectra", value: megabytes, unit: "MB" },
    ...timed,
  ];
}

function reading(time: number, i: number): NewReading {
  const value = 10 + Math.sin(i / 1000) + (i % 97) / 1000;
  const judged: Judged = {
    stream: "s",
    time,
    sequence: i,
    properties: Object.fromEntries(names.map((name, p) => [name, { value: value + p, uncertainty: 0.1 }])),
    t2: 3,
    q: 1e-4,
    leverage: 0.1,
    nearest: 1,
    ratios: { t2: 0.3 + (i % 31) / 100, q: 0.4 + (i % 37) / 100, nearest: 0.5 },
    verdict: i % 5000 === 0 ? ["unfamiliar"] : ["inside"],
    model: "a".repeat(64),
    limitSet: 1,
  };
  const values = Float64Array.of(0.5, 0.25);
  return { judged, receivedAt: time, late: false, history: true, gapFrom: null, values };
}
