import { describe, expect, test } from "vitest";
import { csvOf, readingCsv, trendCsv } from "../../client/data/csv.ts";
import { type HeldTrend, held } from "../../client/data/trend-columns.ts";
import { plantTime } from "../../client/words/plant-time.ts";
import { type ReadingView, verdictMask } from "../../core/messages/index.ts";

test("cells are quoted where they must be, and what is not there is empty", () => {
  expect(csvOf([["a,b", 'say "x"', null, 1.5, undefined, "two\nlines"]])).toBe(
    '"a,b","say ""x""",,1.5,,"two\nlines"\r\n',
  );
});

describe("a trend as CSV", () => {
  const at = Date.UTC(2026, 6, 1, 12);
  const trend: HeldTrend = held({
    stream: "bq-201",
    from: at,
    to: at + 4000,
    whole: true,
    widthMs: 0,
    gaps: [],
    time: [at, at + 2000, at + 4000],
    count: [1, 1, 1],
    verdict: [verdictMask(["inside"]), verdictMask(["unfamiliar", "extrapolated"]), verdictMask(["unusable"])],
    properties: {
      ethanol: { mean: [91, 92, null], min: [91, 92, null], max: [91, 92, null], uncertainty: [0.3, 0.3, null] },
    },
    t2: { max: [0.2, 1.5, null], mean: [0.2, 1.5, null] },
    q: { max: [0.4, 3, null], mean: [0.4, 3, null] },
  });
  const rows = (from: number, to: number) =>
    trendCsv(trend, [{ name: "ethanol", unit: "wt%" }], { from, to, time: plantTime("Europe/London") })
      .trimEnd()
      .split("\r\n");

  test("carries both times, and an uncertainty only where the reading was inside", () => {
    expect(rows(at, at + 4000)).toEqual([
      "time (UTC),time (Europe/London),readings,ethanol (wt%),ethanol uncertainty (wt%),ethanol lowest (wt%),ethanol highest (wt%),verdict,largest T2 ratio,largest Q ratio",
      "2026-07-01T12:00:00.000Z,2026-07-01 13:00:00 UTC+1,1,91,0.3,91,91,inside,0.2,0.4",
      "2026-07-01T12:00:02.000Z,2026-07-01 13:00:02 UTC+1,1,92,,92,92,unfamiliar extrapolated,1.5,3",
      "2026-07-01T12:00:04.000Z,2026-07-01 13:00:04 UTC+1,1,,,,,unusable,,",
    ]);
  });

  test("holds what is in the window and no more", () => {
    expect(rows(at + 1, at + 3999)).toHaveLength(2);
  });
});

test("a reading as CSV leaves the model's columns empty for channels that it does not see", () => {
  const reading = {
    axis: { unit: "nm", points: [1000, 1004] },
    spectrum: [0.1, 0.2],
    calibration: { mean: [0.11, 0.21], low: [0.1, 0.2], high: [0.12, 0.22] },
    explanation: {
      axis: [1004],
      preprocessed: [1],
      reconstructed: [0.9],
      residual: [0.1],
      t2: [2],
      q: [0.01],
      predictions: [{ name: "water", contributions: [0.3], regions: [] }],
    },
  } as unknown as ReadingView;
  expect(readingCsv(reading).trimEnd().split("\r\n").slice(1)).toEqual([
    "1000,0.1,0.11,0.1,0.12,,,,,,",
    "1004,0.2,0.21,0.2,0.22,1,0.9,0.1,2,0.01,0.3",
  ]);
});
