import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type PairingRules, pairOf, searchedFor } from "../../../core/agreement/index.ts";
import type { Judged, Verdict } from "../../../core/messages/index.ts";

const at = Date.UTC(2026, 4, 14, 8);
const second = 1000;
const rules: PairingRules = { lagMs: 0, windowMs: 60 * second, gapMs: 50 * second, mostMove: 0.3 };
const water = { name: "water", unit: "wt%" };

function reading(offsetMs: number, value: number | null, verdict: Verdict = "inside"): { judged: Judged } {
  return {
    judged: {
      stream: "s",
      time: at + offsetMs,
      sequence: 1,
      properties: { water: { value, uncertainty: null } },
      t2: 1,
      q: 1,
      leverage: 0.1,
      nearest: 1,
      ratios: { t2: 0.1, q: 0.1, nearest: 0.1 },
      verdict: [verdict],
      model: "m",
      limitSet: 3,
    },
  };
}

function paired(readings: { judged: Judged }[], more: Partial<PairingRules> = {}, sampleTime = at) {
  const pairing = pairOf(sampleTime, water, readings, { ...rules, ...more });
  if (pairing.kind !== "pair") throw new Error(pairing.says);
  return pairing.pair;
}

describe("a laboratory result is matched by the time at which its sample was drawn", () => {
  test("to the mean of the readings in the window, ends included", () => {
    const pair = paired([reading(-30_000, 7), reading(0, 7.1), reading(30_000, 7.2), reading(31_000, 9)]);
    expect(pair.predicted).toBeCloseTo(7.1, 12);
    expect(pair).toMatchObject({ readings: 3, from: at - 30_000, to: at + 30_000, interpolated: false, apart: null });
  });

  test("the lag is taken off: the sample point lies behind the probe", () => {
    const readings = [reading(-120_000, 5), reading(0, 7)];
    expect(paired(readings, { lagMs: 120_000 }).predicted).toBe(5);
  });

  test("without a reading in the window, to the line between the two around it", () => {
    const pair = paired([reading(-10_000, 7), reading(30_000, 7.2)], { windowMs: 0 });
    expect(pair.predicted).toBeCloseTo(7.05, 12);
    expect(pair).toMatchObject({ interpolated: true, readings: 2 });
  });

  test("but never across a gap, nor from one side: then there is nothing to compare with", () => {
    for (const readings of [
      [reading(-20_000, 7), reading(31_000, 7)], // 51 s apart; a gap begins at 50 s
      [reading(-40_000, 7)],
      [],
    ]) {
      const pairing = pairOf(at, water, readings, { ...rules, windowMs: 0 });
      expect(pairing.kind).toBe("no readings");
      expect(pairing).toMatchObject({ says: expect.stringContaining("2026-05-14T08:00:00.000Z") });
    }
  });

  test("all that can be matched is searched for", () => {
    expect(searchedFor(at, { ...rules, lagMs: 10_000 })).toEqual({ from: at - 60_000, to: at + 40_000 });
    expect(searchedFor(at, { ...rules, windowMs: 300_000 })).toEqual({ from: at - 150_000, to: at + 150_000 });
  });
});

describe("a pair is kept apart, and says why", () => {
  test("when half of its readings or more were not inside", () => {
    const pair = paired([reading(-5000, 7), reading(0, 7.1, "unfamiliar")]);
    expect(pair).toMatchObject({ apart: "not inside", verdict: "unfamiliar" });
    expect(pair.says).toMatch(/^Kept apart: 1 of 2 readings unfamiliar\./);
  });

  test("a single bubble among good readings is left out of the mean, and said", () => {
    const pair = paired([reading(-5000, 7), reading(0, 99, "unfamiliar"), reading(5000, 7.1)]);
    expect(pair.predicted).toBeCloseTo(7.05, 12);
    expect(pair).toMatchObject({ apart: null, readings: 2, verdict: "unfamiliar" });
    expect(pair.says).toMatch(/^1 of 3 readings were not inside/);
  });

  test("when one of the two that it is interpolated between was not inside", () => {
    expect(paired([reading(-5000, 7), reading(5000, 7, "extrapolated")], { windowMs: 0 }).apart).toBe("not inside");
  });

  test("when the process moved by more than the model's error, said in numbers", () => {
    const moving = [reading(-20_000, 7), reading(0, 7.2), reading(20_000, 7.31)];
    const pair = paired(moving);
    expect(pair.apart).toBe("process moved");
    expect(pair.says).toContain("moved by 0.31 wt% within the window, more than the model's error (0.30 wt%)");
    expect(paired([reading(-20_000, 7), reading(20_000, 7.29)]).apart).toBeNull();
    expect(paired(moving, { mostMove: undefined }).apart).toBeNull();
  });

  test("an unusable reading has no number to be paired with", () => {
    expect(paired([reading(0, null, "unusable")])).toMatchObject({ predicted: null, apart: "not inside" });
  });
});

test("whatever the readings: a pair that counts lies between the smallest and the largest inside value of its window", () => {
  const anyReading = fc.record({
    offset: fc.integer({ min: -60_000, max: 60_000 }),
    value: fc.double({ min: 6, max: 8, noNaN: true }),
    verdict: fc.constantFrom<Verdict>("inside", "inside", "inside", "unfamiliar", "sparse"),
  });
  fc.assert(
    fc.property(fc.array(anyReading, { maxLength: 12 }), (list) => {
      const readings = list
        .sort((a, b) => a.offset - b.offset)
        .map(({ offset, value, verdict }) => reading(offset, value, verdict));
      const pairing = pairOf(at, water, readings, { ...rules, mostMove: undefined });
      if (pairing.kind !== "pair" || pairing.pair.apart !== null) return;
      const values = pairing.used.map(({ judged }) => judged.properties.water.value!);
      expect(pairing.used.every(({ judged }) => judged.verdict[0] === "inside")).toBe(true);
      expect(pairing.pair.predicted).toBeGreaterThanOrEqual(Math.min(...values) - 1e-9);
      expect(pairing.pair.predicted).toBeLessThanOrEqual(Math.max(...values) + 1e-9);
    }),
  );
});
