import { describe, expect, test } from "vitest";
import { calibrationCsv, calibrationSet, makePlant, streamIds, streamPlans } from "../../simulator/plant/index.ts";

const plant = makePlant(1);

describe.each(streamIds)("the calibration table of %s", (stream) => {
  const plan = streamPlans[stream];
  const samples = calibrationSet(plant, stream, "calibration");
  const rows = calibrationCsv(plan, samples)
    .trimEnd()
    .split("\n")
    .map((line) => line.split(","));

  test("has sample, time, group, the properties, and a channel every 4 nm from 1 000 to 2 200 nm", () => {
    const [header] = rows as [string[]];
    expect(header.slice(0, 3)).toEqual(["sample", "time", "group"]);
    expect(header.slice(3, 3 + plan.properties.length)).toEqual(plan.properties.map(({ name }) => name));
    expect(header.slice(3 + plan.properties.length).map(Number)).toEqual(
      Array.from({ length: 301 }, (_, j) => 1000 + 4 * j),
    );
  });

  test("has as many rows as the plan says, all of one width, every sample under its own name, in order of time", () => {
    const body = rows.slice(1);
    expect(body).toHaveLength(plan.calibrationSamples);
    for (const row of body) expect(row).toHaveLength(rows[0]!.length);
    expect(new Set(body.map(([sample]) => sample)).size).toBe(body.length);
    const times = body.map(([, time]) => Date.parse(time!));
    expect(times).toEqual([...times].sort((a, b) => a - b));
    for (const row of body) for (const field of row.slice(3)) expect(Number.isFinite(Number(field))).toBe(true);
  });

  test("carries every absorbance so that float32 gives it back exactly", () => {
    samples.forEach(({ values }, i) => {
      const written = rows[i + 1]!.slice(3 + plan.properties.length).map(Number);
      expect(Float32Array.from(written)).toEqual(values);
    });
  });

  test("spans at least 95 % of every calibrated range, evenly", () => {
    for (const { ingredient, calibrated } of plan.free) {
      const k = plan.properties.findIndex(({ name }) => name === ingredient);
      if (k < 0) continue;
      const results = samples.map((sample) => sample.results[k]! / 100);
      expect(Math.max(...results) - Math.min(...results)).toBeGreaterThan(0.95 * (calibrated[1] - calibrated[0]));
      const middle = (calibrated[0] + calibrated[1]) / 2;
      const below = results.filter((result) => result < middle).length / results.length;
      expect(Math.abs(below - 0.5)).toBeLessThan(0.05);
    }
  });

  test("gathers samples into groups of up to six, and its validation set shares no sample, group or spectrum with it", () => {
    const validation = calibrationSet(plant, stream, "validation");
    const sizes = new Map<string, number>();
    for (const { group } of samples) sizes.set(group, (sizes.get(group) ?? 0) + 1);
    for (const members of sizes.values()) expect(members).toBeLessThanOrEqual(6);
    expect(sizes.size).toBe(Math.ceil(samples.length / 6));
    expect(validation.length).toBeGreaterThanOrEqual(20);
    for (const held of validation) {
      expect(samples.some(({ sample, group }) => sample === held.sample || group === held.group)).toBe(false);
      expect(samples.some(({ values }) => values[0] === held.values[0] && values[300] === held.values[300])).toBe(
        false,
      );
    }
  });

  test("is the same for the same seed and another for another", () => {
    expect(calibrationSet(makePlant(1), stream, "calibration")).toEqual(samples);
    expect(calibrationSet(makePlant(2), stream, "calibration")).not.toEqual(samples);
  });
});
