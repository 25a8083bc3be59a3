import { describe, expect, test } from "vitest";
import { laneLayout, yRange } from "../../client/charts/lane-layout.ts";
import { type PanelPicture, panelRange } from "../../client/charts/panel-picture.ts";
import { ratioPlace } from "../../client/charts/ratio-scale.ts";
import { tickLabel, timeStep, timeTicks } from "../../client/charts/time-ticks.ts";
import { spreadLabels, valueStep, valueTicks } from "../../client/charts/value-ticks.ts";
import { plantTime } from "../../client/words/plant-time.ts";

const hour = 3_600_000;

describe("the trust ribbon's scale", () => {
  test.each([
    [0.1, 0],
    [1, 0.5],
    [10, 1],
    [0.01, 0],
    [400, 1],
    [Math.sqrt(10), 0.75],
    [0, 0],
  ])("a ratio of %f stands at %f of the strip", (ratio, place) => {
    expect(ratioPlace(ratio)).toBeCloseTo(place, 12);
  });
});

describe("a lane's layout", () => {
  test.each([120, 180, 230, 320, 500])(
    "at %i px trend, T² and Q stand one under the other without touching",
    (height) => {
      const { trendTop, trendBottom, t2Top, qTop, strip, height: plot } = laneLayout(height);
      expect(trendTop).toBeLessThan(trendBottom);
      expect(trendBottom).toBeLessThan(t2Top);
      expect(t2Top + strip).toBeLessThan(qTop);
      expect(qTop + strip).toBe(plot);
    },
  );

  test("the property's scale falls exactly on the rows of the trend", () => {
    const layout = laneLayout(240);
    const [bottom, top] = yRange(80, 94, layout);
    const rowOf = (value: number) => ((top - value) / (top - bottom)) * layout.height;
    expect(rowOf(94)).toBeCloseTo(layout.trendTop, 9);
    expect(rowOf(80)).toBeCloseTo(layout.trendBottom, 9);
  });
});

describe("time ticks", () => {
  const berlin = plantTime("Europe/Berlin");
  const clocks = (from: number, to: number, step: number) =>
    timeTicks(from, to, step, berlin).map((at) => berlin.clock(at).slice(0, 5));

  test("stand on the plant's round hours, not on UTC's", () => {
    const kolkata = plantTime("Asia/Kolkata");
    const from = Date.UTC(2026, 11, 1, 0, 10);
    expect(timeTicks(from, from + 3 * hour, hour, kolkata).map((at) => kolkata.clock(at))).toEqual([
      "06:00:00",
      "07:00:00",
      "08:00:00",
    ]);
  });

  test("keep to the plant's clock through the night when it goes forward", () => {
    // 2026-03-29 in Berlin: after 01:59 comes 03:00
    expect(clocks(Date.UTC(2026, 2, 28, 21), Date.UTC(2026, 2, 29, 6), 3 * hour)).toEqual(["00:00", "03:00", "06:00"]);
  });

  test("and back", () => {
    expect(clocks(Date.UTC(2026, 9, 24, 20), Date.UTC(2026, 9, 25, 8), 3 * hour)).toEqual([
      "00:00",
      "03:00",
      "06:00",
      "09:00",
    ]);
  });

  test("are never more than asked for", () => {
    for (const span of [60_000, 900_000, hour, 8 * hour, 24 * hour, 168 * hour, 336 * hour]) {
      expect(span / timeStep(span, 8)).toBeLessThanOrEqual(8);
    }
  });

  test("name the day at midnight, the seconds where they matter", () => {
    const midnight = Date.UTC(2026, 11, 1, 23);
    expect(tickLabel(midnight, 6 * hour, berlin)).toBe("2 Dec");
    expect(tickLabel(midnight + hour, hour, berlin)).toBe("01:00");
    expect(tickLabel(midnight + 10_000, 10_000, berlin)).toBe("00:00:10");
  });
});

describe("value ticks", () => {
  test("are round and within the scale", () => {
    expect(valueTicks(84, 98, 4)).toEqual([85, 90, 95]);
    expect(valueTicks(0, 0.5, 3).map((value) => Number(value.toFixed(6)))).toEqual([0, 0.2, 0.4]);
    expect(valueStep(0, 7, 4)).toBe(2);
  });

  test("labels that would overlap are moved apart, no further than the room allows", () => {
    const spots = spreadLabels([50, 52, 120], 14, 6, 150);
    expect(spots[1] - spots[0]).toBeGreaterThanOrEqual(14);
    expect(spots[2]).toBe(120);
    expect(spreadLabels([7, 8], 14, 6, 150)).toEqual([7, 21]);
    const crowded = spreadLabels([148, 149, 150], 14, 6, 150);
    expect(crowded).toEqual([122, 136, 150]);
  });
});

describe("a panel's range", () => {
  const panel = (part: Partial<PanelPicture>): PanelPicture => ({
    title: "",
    axis: [1, 2],
    unit: "nm",
    lines: [],
    ...part,
  });

  test("holds the lines and the calibration's range", () => {
    const [low, high] = panelRange(
      panel({
        lines: [{ label: "reading", values: [0.2, null], manner: "reading" }],
        range: { low: [0.1, 0.1], high: [0.9, 0.8], label: "" },
      }),
    );
    expect(low).toBeLessThan(0.1);
    expect(high).toBeGreaterThan(0.9);
  });

  test("of bars always holds zero, so that a bar's length means its size", () => {
    const [low, high] = panelRange(panel({ bars: { values: [2, 3], colour: "odd", label: "" } }));
    expect(low).toBe(0);
    expect(high).toBeGreaterThan(3);
  });

  test("of nothing is still a range", () => {
    expect(panelRange(panel({}))).toEqual([0, 1]);
  });
});
