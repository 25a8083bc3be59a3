import fc from "fast-check";
import { afterEach, beforeEach, expect, test } from "vitest";
import type { WantedProperty } from "../../core/handover/index.ts";
import type { StreamAccount, TimeKind, Verdict } from "../../core/messages/index.ts";
import type { NewReading } from "../../server/store/store.ts";
import { runs } from "../core/runs.ts";
import { changes, makers, modelId, names, reading, stream } from "./store-record.ts";

const minute = 60_000;
const hour = 60 * minute;
const begin = Date.UTC(2026, 4, 14, 4);
const gapMs = 25_000;
const wanted: WantedProperty[] = [
  { name: "ethanol", unit: "wt%", decimals: 1, target: [88, 94] },
  { name: "water", unit: "wt%", decimals: 1 },
];

interface Shot {
  time: number;
  verdict: Verdict[];
  ethanol: number;
  gapFrom: number | null;
}

/** The account by its own definition, reading by reading, without a database: what the quick way must come to. */
function plainAccount(shots: readonly Shot[], from: number, to: number): Record<string, number> {
  const ms: Record<string, number> = {};
  let outsideMs = 0;
  const values: number[] = [];
  const add = (kind: TimeKind, since: number, until: number, value?: number) => {
    const part = Math.max(0, Math.min(until, to) - Math.max(since, from));
    if (part > 0) ms[kind] = (ms[kind] ?? 0) + part;
    if (kind === "inside" && value !== undefined && (value < 88 || value > 94)) outsideMs += part;
  };
  if (shots.length === 0) return { "no data": to - from, outsideMs, n: 0 };
  add("no data", from, shots[0].time);
  shots.forEach(({ time, verdict, ethanol }, i) => {
    if (time >= from && time < to && verdict[0] === "inside") values.push(ethanol);
    const next = shots[i + 1];
    if (!next) {
      add(verdict[0], time, time + gapMs, ethanol);
      add("no data", time + gapMs, to);
    } else if (next.gapFrom !== null) add("no data", time, next.time);
    else add(verdict[0], time, next.time, ethanol);
  });
  return {
    ...ms,
    outsideMs,
    n: values.length,
    ...(values.length ? { min: Math.min(...values), max: Math.max(...values) } : {}),
  };
}

function flat({ ms, properties: [{ min, max, outsideMs }] }: StreamAccount, n: number): Record<string, number> {
  const spent = Object.fromEntries(Object.entries(ms).filter(([, part]) => part > 0));
  return { ...spent, outsideMs, n, ...(min === null || max === null ? {} : { min, max }) };
}

function stored({ time, verdict, ethanol, gapFrom }: Shot): NewReading {
  const properties = { ethanol: { value: ethanol, uncertainty: 0.2 }, water: { value: 9, uncertainty: null } };
  return reading(time, { verdict, properties }, { gapFrom });
}

let place: ReturnType<(typeof makers)[0]["place"]>;
beforeEach(() => {
  place = makers[0].place();
});
afterEach(() => place.remove());

function account(shots: readonly Shot[], from: number, to: number): StreamAccount {
  const writer = place.writer();
  writer.addModel({ id: modelId, name: "m", properties: names, text: "{}" });
  writer.commit(changes({ readings: shots.map(stored) }));
  writer.close();
  const reader = place.reader();
  const found = reader.account(stream, { wanted, from, to, gapMs });
  reader.close();
  return found;
}

/** Long runs of one kind, so that whole roll-ups are taken, with breaks in them, so that some are not. */
const run = fc.record({
  verdict: fc.constantFrom<Verdict[]>(
    ["inside"],
    ["inside"],
    ["unfamiliar"],
    ["unfamiliar", "extrapolated"],
    ["unusable"],
  ),
  readings: fc.integer({ min: 1, max: 900 }),
  level: fc.constantFrom(87, 90, 91, 94, 95),
  gapBefore: fc.constantFrom(0, 0, 0, 40_000, 30 * minute),
});

function shotsOf(
  these: { verdict: Verdict[]; readings: number; level: number; gapBefore: number }[],
  start: number,
): Shot[] {
  const shots: Shot[] = [];
  let time = start;
  for (const { verdict, readings, level, gapBefore } of these) {
    const last = shots.at(-1)?.time;
    if (last !== undefined && gapBefore > 0) time += gapBefore;
    for (let i = 0; i < readings; i++, time += 5000) {
      const first = i === 0 && gapBefore > 0 && last !== undefined;
      shots.push({ time, verdict, ethanol: level + (i % 3) / 2, gapFrom: first ? last : null });
    }
  }
  return shots;
}

test("a stream's time is the same from roll-ups as reading by reading", { timeout: 300_000 }, () => {
  fc.assert(
    fc.property(
      fc.array(run, { maxLength: 8 }),
      fc.integer({ min: 0, max: 4 * hour }),
      fc.integer({ min: -hour, max: hour }),
      (these, length, offset) => {
        const shots = shotsOf(these, begin);
        const [from, to] = [begin + offset, begin + offset + length + 1];
        const found = account(shots, from, to);
        place.remove();
        place = makers[0].place();
        const within = shots.filter(({ time }) => time >= from && time < to);
        expect(found.readings).toBe(within.length);
        const trusted = within.filter(({ verdict }) => verdict[0] === "inside");
        expect(flat(found, trusted.length)).toEqual(plainAccount(shots, from, to));
        const mean = trusted.reduce((sum, { ethanol }) => sum + ethanol, 0) / trusted.length;
        if (trusted.length > 0) expect(found.properties[0].mean).toBeCloseTo(mean, 9);
        else expect(found.properties[0].mean).toBeNull();
        expect(Object.values(found.ms).reduce((sum, part) => sum + part, 0)).toBe(to - from);
      },
    ),
    { numRuns: runs(25) },
  );
});

test("a gap is told with where it begins and ends, within the shift", () => {
  const shots = shotsOf(
    [
      { verdict: ["inside"], readings: 12, level: 90, gapBefore: 0 },
      { verdict: ["inside"], readings: 12, level: 90, gapBefore: 10 * minute },
    ],
    begin,
  );
  const { gaps, ms } = account(shots, begin - minute, begin + 20 * minute);
  const [lastBefore, lastOfAll] = [shots[11].time, shots[23].time];
  expect(gaps).toEqual([
    [begin - minute, begin],
    [lastBefore, shots[12].time],
    [lastOfAll + gapMs, begin + 20 * minute],
  ]);
  expect(ms["no data"]).toBe(gaps.reduce((sum, [a, b]) => sum + b - a, 0));
});

test("a stream that was never read has no data at all", () => {
  expect(account([], begin, begin + hour)).toMatchObject({
    readings: 0,
    gaps: [[begin, begin + hour]],
    ms: { "no data": hour },
  });
});
