import { describe, expect, test } from "vitest";
import { duration, period } from "../../client/words/duration.ts";
import { plantTime } from "../../client/words/plant-time.ts";
import {
  decimalsFor,
  decimalsOfStep,
  figure,
  fixed,
  grouped,
  percent,
  ratio,
  withUncertainty,
} from "../../client/words/quantity.ts";

describe("the digits of a value follow its uncertainty", () => {
  test.each([
    [61.4237, 0.31, "61.4 ± 0.3"],
    [0.31, 0.02, "0.31 ± 0.02"],
    [872.6, 4.2, "873 ± 4"],
    // 0.096 rounds to 0.1, so the value has one decimal, not two
    [9.567, 0.096, "9.6 ± 0.1"],
    [-0.04, 0.3, "0.0 ± 0.3"],
    [-1.26, 0.3, "−1.3 ± 0.3"],
  ])("%f with %f reads %s", (value, uncertainty, words) => {
    expect(withUncertainty(value, uncertainty)).toBe(words);
  });

  test("without a usable uncertainty one decimal is shown", () => {
    expect([null, undefined, 0, -1, Number.NaN].map(decimalsFor)).toEqual([1, 1, 1, 1, 1]);
  });
});

test("a true minus sign stands before negative numbers, never before zero", () => {
  expect(fixed(-2.5, 1)).toBe("−2.5");
  expect(fixed(-0.01, 1)).toBe("0.0");
});

test.each([
  [0.1, 1],
  [0.25, 2],
  [5, 0],
  [0.05, 2],
])("a step of %f needs %i decimals", (step, decimals) => {
  expect(decimalsOfStep(step)).toBe(decimals);
});

test.each([
  [0.347, "0.35"],
  [0.9949, "0.99"],
  [0.996, "1.0"],
  [3.44, "3.4"],
  [12.4, "12"],
  [5000, "> 1000"],
  [null, "—"],
])("the ratio %s reads %s", (value, words) => {
  expect(ratio(value)).toBe(words);
});

test("figures have three digits, and powers of ten where they are very small or large", () => {
  expect(figure(0.0025249)).toBe("0.00252");
  expect(figure(8.12e-6)).toBe("8.12 × 10⁻⁶");
  expect(figure(-2e-4, 4)).toBe("−2 × 10⁻⁴");
  expect(figure(0)).toBe("0");
});

test("thousands stand apart by a thin space, shares by a thin space from their sign", () => {
  expect(grouped(1724)).toBe("1\u2009724");
  expect(grouped(1234567.25)).toBe("1\u2009234\u2009567.25");
  expect(percent(0.813)).toBe("81\u2009%");
  expect(percent(0.044)).toBe("4.4\u2009%");
});

test.each([
  [38_400, "38 s"],
  [250_000, "4 min 10 s"],
  [60_000, "1 min"],
  [25 * 60_000, "25 min"],
  [12_000_000, "3 h 20 min"],
  [190_800_000, "2 d 5 h"],
  [-5, "0 s"],
])("%i ms reads %s", (ms, words) => {
  expect(duration(ms)).toBe(words);
});

test("a period below a minute keeps its fraction", () => {
  expect(period(500)).toBe("0.5 s");
  expect(period(2000)).toBe("2 s");
  expect(period(300_000)).toBe("5 min");
});

describe("the plant's time", () => {
  const london = plantTime("Europe/London");
  const kathmandu = plantTime("Asia/Kathmandu");
  const now = Date.UTC(2026, 6, 1, 12, 0, 0);

  test("is the zone's, with the offset of the day", () => {
    expect(london.clock(now)).toBe("13:00:00");
    expect(london.zoneName(now)).toBe("UTC+1");
    expect(london.zoneName(Date.UTC(2026, 11, 1))).toBe("UTC");
    expect(kathmandu.zoneName(now)).toBe("UTC+5:45");
    expect(plantTime("America/St_Johns").zoneName(now)).toBe("UTC−2:30");
    expect(london.full(now)).toBe("2026-07-01 13:00:00 UTC+1");
  });

  test("carries a date only where the plant's day is not today", () => {
    // 23:30 UTC is half past midnight of the next day in London's summer
    expect(london.brief(Date.UTC(2026, 5, 30, 23, 30), now)).toBe("00:30");
    expect(london.brief(Date.UTC(2026, 5, 30, 22, 30), now)).toBe("30 Jun 23:30");
    expect(london.exact(Date.UTC(2025, 5, 30, 22, 30, 5), now)).toBe("30 Jun 2025 23:30:05");
  });

  test("passes through both changes of the clocks", () => {
    // 2026-03-29 01:00 UTC: London goes from 01:00 to 02:00; 2026-10-25 01:00 UTC: from 02:00 back to 01:00
    expect(london.clock(Date.UTC(2026, 2, 29, 0, 59, 59))).toBe("00:59:59");
    expect(london.clock(Date.UTC(2026, 2, 29, 1, 0, 0))).toBe("02:00:00");
    expect(london.clock(Date.UTC(2026, 9, 25, 0, 59, 59))).toBe("01:59:59");
    expect(london.clock(Date.UTC(2026, 9, 25, 1, 0, 0))).toBe("01:00:00");
  });
});
