import { describe, expect, test } from "vitest";
import { appendInPlace, entryAt, type HeldTrend, held, trimInPlace } from "../../client/data/trend-columns.ts";
import { gapsOf, trendRuns, verdictOfInterval } from "../../client/data/trend-runs.ts";
import { trendRow, trendRows, trendSentence } from "../../client/data/trend-words.ts";
import { plantTime } from "../../client/words/plant-time.ts";
import { type Judged, type Trend, type Verdict, verdictMask } from "../../core/messages/index.ts";

const start = Date.UTC(2026, 11, 1, 10);
const gapMs = 10_000;
const property = {
  name: "ethanol",
  unit: "wt%",
  range: [80, 95] as [number, number],
  scale: [84, 98] as [number, number],
  limits: [],
};

function reading(second: number, value: number | null, verdict: Verdict = "inside", q = 0.4): Judged {
  return {
    stream: "bq-201",
    time: start + second * 1000,
    sequence: second,
    properties: { ethanol: { value, uncertainty: verdict === "inside" ? 0.3 : null } },
    t2: 1,
    q: 1,
    leverage: 0.02,
    nearest: 0.3,
    ratios: { t2: 0.3, q: value === null ? null : q, nearest: 0.3 },
    verdict: [verdict],
    model: "m",
    limitSet: 1,
  };
}

function trendOf(readings: readonly Judged[], { widthMs = 0 } = {}): HeldTrend {
  const empty: Trend = {
    stream: "bq-201",
    from: start - 60_000,
    to: start,
    whole: widthMs === 0,
    widthMs,
    gaps: [],
    time: [],
    count: [],
    verdict: [],
    properties: { ethanol: { mean: [], min: [], max: [], uncertainty: [] } },
    t2: { max: [], mean: [] },
    q: { max: [], mean: [] },
  };
  const trend = held(empty);
  for (const judged of readings) appendInPlace(trend, judged, gapMs);
  return trend;
}

const every2s = (count: number, verdict: (index: number) => Verdict = () => "inside") =>
  Array.from({ length: count }, (_, index) => reading(index * 2, 90 + index / 10, verdict(index)));

describe("live readings", () => {
  test("are appended one by one where the trend holds whole readings", () => {
    const trend = trendOf(every2s(3));
    expect(trend.time).toEqual([start, start + 2000, start + 4000]);
    expect(trend.properties["ethanol"].mean).toEqual([90, 90.1, 90.2]);
    expect(trend.newest).toBe(start + 4000);
  });

  test("that are there already change nothing", () => {
    const trend = trendOf(every2s(3));
    expect(appendInPlace(trend, reading(4, 50), gapMs)).toBe(false);
    expect(appendInPlace(trend, reading(2, 50), gapMs)).toBe(false);
    expect(trend.properties["ethanol"].mean).toEqual([90, 90.1, 90.2]);
  });

  test("gather in intervals that keep minimum, maximum, the largest ratio and every verdict", () => {
    const trend = trendOf(
      [reading(0, 90), reading(2, 92), reading(4, 70, "unfamiliar", 8), reading(6, 91), reading(10, 95)],
      { widthMs: 10_000 },
    );
    expect(trend.count).toEqual([4, 1]);
    expect(trend.properties["ethanol"].min).toEqual([70, 95]);
    expect(trend.properties["ethanol"].max).toEqual([92, 95]);
    expect(trend.properties["ethanol"].mean[0]).toBeCloseTo((90 + 92 + 70 + 91) / 4, 10);
    expect(trend.q.max[0]).toBe(8);
    expect(trend.verdict[0]).toBe(verdictMask(["inside", "unfamiliar"]));
  });

  test("that come after a long silence leave a gap, others none", () => {
    expect(trendOf([reading(0, 90), reading(9, 90), reading(25, 90)]).gaps).toEqual([[start + 9000, start + 25_000]]);
  });

  test("do not make a screen that stands for weeks hold more than its window", () => {
    const trend = trendOf(every2s(1000));
    trimInPlace(trend, start + 1_800_000);
    expect(trend.time[0]).toBe(start + 1_800_000);
    const lengths = [
      trend.time,
      trend.count,
      trend.verdict,
      ...Object.values(trend.properties["ethanol"]),
      trend.t2.max,
      trend.t2.mean,
      trend.q.max,
      trend.q.mean,
    ].map(({ length }) => length);
    expect(new Set(lengths)).toEqual(new Set([100]));
  });
});

describe("how a line is cut", () => {
  const manners = (trend: HeldTrend) =>
    trendRuns(trend, "ethanol").map(
      ({ verdict, first, last, joins }) => `${verdict} ${first}–${last}${joins ? " joins" : ""}`,
    );

  test("one solid run while every reading is inside", () => {
    expect(manners(trendOf(every2s(5)))).toEqual(["inside 0–4"]);
  });

  test("the way into doubt and the way out of it are drawn as doubt", () => {
    const trend = trendOf(every2s(6, (index) => (index === 2 || index === 3 ? "unfamiliar" : "inside")));
    expect(manners(trend)).toEqual(["inside 0–1", "unfamiliar 2–4 joins", "inside 4–5"]);
  });

  test("never across a gap", () => {
    const trend = trendOf([reading(0, 90), reading(2, 90), reading(40, 91), reading(42, 91, "extrapolated")]);
    expect(manners(trend)).toEqual(["inside 0–1", "inside 2–2", "extrapolated 3–3 joins"]);
  });

  test("never across a reading without a number", () => {
    expect(manners(trendOf([reading(0, 90), reading(2, null, "unusable"), reading(4, 90)]))).toEqual([
      "inside 0–0",
      "inside 2–2",
    ]);
  });

  test("an interval with a few doubtful readings among many is still inside, one that is doubtful on the whole is not", () => {
    const mixed = verdictMask(["inside", "unfamiliar"]);
    expect(verdictOfInterval(mixed, 0.3, 0.6)).toBe("inside");
    expect(verdictOfInterval(mixed, 0.3, 1.4)).toBe("unfamiliar");
    expect(verdictOfInterval(verdictMask(["inside", "extrapolated"]), 1.2, 0.5)).toBe("extrapolated");
    expect(verdictOfInterval(verdictMask(["sparse"]), 0.3, 0.5)).toBe("sparse");
    expect(verdictOfInterval(0, null, null)).toBeUndefined();
  });
});

describe("gaps on the screen", () => {
  const end = start + 8000;
  const live = (to: number) => ({ from: start, to, live: true });

  test("there is none while readings come", () => {
    expect(gapsOf(trendOf(every2s(5)), live(end + 3000), gapMs)).toEqual([]);
  });

  test("a live window whose readings have stopped is hatched up to now", () => {
    expect(gapsOf(trendOf(every2s(5)), live(end + 60_000), gapMs)).toEqual([{ from: end, to: end + 60_000 }]);
  });

  test("when what is shown is old, all after the newest reading is hatched at once", () => {
    const window = { ...live(end + 4000), old: true };
    expect(gapsOf(trendOf(every2s(5)), window, gapMs)).toEqual([{ from: end, to: end + 4000 }]);
  });

  test("what was read as empty is hatched; what was not read yet is not", () => {
    const trend = trendOf(every2s(5));
    const window = { from: start - 600_000, to: start + 600_000, live: false };
    expect(gapsOf(trend, window, gapMs)).toEqual([{ from: start - 60_000, to: start }]);
  });

  test("an answer without readings is hatched where it was asked for, and only there", () => {
    const window = { from: start - 600_000, to: start + 600_000, live: false };
    expect(gapsOf(trendOf([]), window, gapMs)).toEqual([{ from: start - 60_000, to: start }]);
  });

  test("are cut to the window, in order", () => {
    const trend = trendOf([reading(0, 90), reading(60, 90), reading(62, 90), reading(120, 90)]);
    const window = { from: start + 30_000, to: start + 90_000, live: false };
    expect(gapsOf(trend, window, gapMs)).toEqual([
      { from: start + 30_000, to: start + 60_000 },
      { from: start + 62_000, to: start + 90_000 },
    ]);
  });
});

describe("the entry at the cursor", () => {
  const trend = trendOf([reading(0, 90), reading(6, 91), reading(60, 92)]);
  test.each([
    [2, 0],
    [4, 1],
    [30, undefined],
    [65, 2],
    [75, undefined],
    [-5, 0],
  ])("at %i s is entry %s", (second, entry) => {
    expect(entryAt(trend, start + second * 1000, gapMs)).toBe(entry);
  });
});

describe("the chart in words", () => {
  const time = plantTime("UTC");
  const sight = (trend: HeldTrend, seconds: number) => ({
    trend,
    property,
    from: start,
    to: start + seconds * 1000,
    now: start + seconds * 1000,
    time,
    gapMs,
    live: true,
  });

  test("says the stretch, the spread, the doubt and the gaps", () => {
    const trend = trendOf([...every2s(3), reading(6, 93, "unfamiliar", 3), reading(40, 90)]);
    expect(trendSentence(sight(trend, 41))).toBe(
      "Ethanol, 10:00:00 to 10:00:41 (41 s): between 90.0 and 93.0\u2009wt%; 1 reading unfamiliar; 1 gap.",
    );
  });

  test("says that there is nothing", () => {
    expect(trendSentence(sight(trendOf([]), 60))).toBe("Ethanol, 10:00:00 to 10:01:00 (1 min): no readings.");
  });

  test("gives no ± to a reading that is not inside, and no number to one that has none", () => {
    const trend = trendOf([reading(0, 90), reading(2, 93, "unfamiliar"), reading(4, null, "unusable")]);
    expect([0, 1, 2].map((index) => trendRow(trend, property, index).value)).toEqual([
      "90.0 ± 0.3\u2009wt%",
      "93.0\u2009wt%",
      "no number",
    ]);
  });

  test("gives the spread, not ±, to an interval of several", () => {
    const trend = trendOf([reading(0, 90), reading(2, 93, "unfamiliar", 3)], { widthMs: 10_000 });
    expect(trendRow(trend, property, 0).value).toBe("91.5\u2009wt% (90.0 to 93.0)");
  });

  test("gives no ± to an interval in which not all was inside, though it has an uncertainty", () => {
    const trend = trendOf([reading(0, 90), reading(2, 90, "unfamiliar", 3)], { widthMs: 10_000 });
    expect(trendRow(trend, property, 0).value).toBe("90.0\u2009wt%");
  });

  test("takes rows evenly, the newest first", () => {
    const rows = trendRows(sight(trendOf(every2s(400)), 801), 40);
    expect(rows.length).toBe(40);
    expect(rows[0].at).toBe(start + 798_000);
  });
});
