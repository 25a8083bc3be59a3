import { describe, expect, test } from "vitest";
import { conditionsAt, makePlant, streamIds, streamPlans } from "../../simulator/plant/index.ts";
import { type PlantEvent, resultsOf, samplesReported, usualSchedule } from "../../simulator/scenario/index.ts";

const plant = makePlant(1);
const day = 86_400_000;
const from = Date.UTC(2026, 9, 1);
const samples = samplesReported(usualSchedule, 1, "bq-201", from, from + 60 * day);
const water = (events: PlantEvent[] = []) =>
  samples.map((sample) => {
    const { value } = resultsOf(plant, events, sample).find(({ property }) => property === "water")!;
    return value - 100 * conditionsAt(plant, "bq-201", sample.drawn).composition.water;
  });
const mean = (values: number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;

describe("grab samples", () => {
  test("are drawn six times a day of every line, and reported in time order or nearly so, hours later", () => {
    for (const stream of streamIds)
      expect(samplesReported(usualSchedule, 1, stream, from, from + 10 * day)).toHaveLength(60);
    for (const { drawn, reported } of samples) {
      expect((reported - drawn) / usualSchedule.turnaroundMs).toBeGreaterThanOrEqual(0.79);
      expect((reported - drawn) / usualSchedule.turnaroundMs).toBeLessThanOrEqual(1.21);
    }
  });

  test("are the same whatever stretch is asked for, each reported once", () => {
    const parts = Array.from({ length: 60 }, (_, i) =>
      samplesReported(usualSchedule, 1, "bq-201", from + i * day, from + (i + 1) * day),
    );
    expect(parts.flat()).toEqual(samples);
  });

  test("are found with the laboratory's own error, and no bias", () => {
    const errors = water();
    const { absolute, relative } = streamPlans["bq-201"].properties[1].error;
    const expected = Math.hypot(absolute, relative * 7.4); // at the middle of the range
    const deviation = Math.sqrt(mean(errors.map((e) => (e - mean(errors)) ** 2)));
    expect(deviation / expected).toBeGreaterThan(0.85);
    expect(deviation / expected).toBeLessThan(1.15);
    expect(Math.abs(mean(errors))).toBeLessThan((3 * expected) / Math.sqrt(errors.length));
  });

  test("come out low while a reagent is aged: by the bias of its line, for samples drawn in that time, in that property alone", () => {
    const event: PlantEvent = {
      kind: "lab-bias",
      stream: "bq-201",
      start: from + 10 * day,
      end: from + 20 * day,
      size: 2,
    };
    const apart = water([event]).map((e, i) => e - water()[i]);
    samples.forEach(({ drawn }, i) => {
      const aged = drawn >= event.start && drawn < event.end;
      expect(apart[i]).toBeCloseTo(aged ? 2 * streamPlans["bq-201"].sizes.reagent.bias : 0, 1);
    });
    const [ethanol] = resultsOf(plant, [event], samples[80]);
    expect(ethanol).toEqual(resultsOf(plant, [], samples[80])[0]);
  });
});
