import { describe, expect, test } from "vitest";
import {
  boxLimit,
  boxMomentsLimit,
  empiricalQuantile,
  jacksonMudholkarLimit,
  LimitError,
  learntLimit,
  t2LimitBeta,
  t2LimitChiSquared,
  t2LimitF,
  thetasOf,
} from "../../../core/limits/index.ts";

// Source: the formulas of Jackson & Mudholkar 1979, Box 1954 and Tracy, Young & Mason 1992, worked by hand with printed quantiles for these cases.
describe("limits of Q for the residual eigenvalues 1, ½, ¼, ⅛, 1/16", () => {
  const eigenvalues = [1, 1 / 2, 1 / 4, 1 / 8, 1 / 16];

  test("the sums of powers", () => {
    expect(thetasOf(eigenvalues)).toEqual({ theta1: 1.9375, theta2: 1.33203125, theta3: 1.142822265625 });
  });

  test.each([
    [0.95, 5.27344, 5.15424],
    [0.99, 8.40741, 7.54561],
  ])("at %f: %f after Jackson & Mudholkar, %f after Box", (confidence, jacksonMudholkar, box) => {
    expect(jacksonMudholkarLimit(eigenvalues, confidence)).toBeCloseTo(jacksonMudholkar, 4);
    expect(boxLimit(eigenvalues, confidence)).toBeCloseTo(box, 4);
  });

  test("the limit after Jackson & Mudholkar goes smoothly through h₀ = 0", () => {
    // one eigenvalue of 1 and k of 0.1: h₀ falls through zero as k grows
    const of = (k: number) => {
      const [theta1, theta2, theta3] = [1 + 0.1 * k, 1 + 0.01 * k, 1 + 0.001 * k];
      return { h0: 1 - (2 * theta1 * theta3) / (3 * theta2 ** 2), eigenvalues: [1, ...new Array<number>(k).fill(0.1)] };
    };
    const limits = Array.from({ length: 12 }, (_, k) => ({
      ...of(k),
      limit: jacksonMudholkarLimit(of(k).eigenvalues, 0.99),
    }));
    expect(limits.some(({ h0 }) => h0 > 0) && limits.some(({ h0 }) => h0 < 0)).toBe(true);
    limits.slice(1).forEach(({ limit }, i) => {
      expect(limit).toBeGreaterThan(limits[i].limit);
      expect(limit).toBeLessThan(1.1 * limits[i].limit);
    });
  });

  test("no residual gives no limit, and says what to do", () => {
    for (const limit of [jacksonMudholkarLimit, boxLimit])
      expect(() => limit([0, 0], 0.99)).toThrow(/residual of the calibration is zero.*fewer components/);
    expect(() => boxMomentsLimit([0.5, 0.5], 0.99)).toThrow(LimitError);
  });
});

describe("limits of T² for 4 components and 60 samples", () => {
  test.each([
    [0.95, 10.868, 9.045, 9.488],
    [0.99, 15.742, 12.251, 13.277],
  ])("at %f: F %f, beta %f, χ² %f", (confidence, f, beta, chiSquared) => {
    const size = { n: 60, components: 4, confidence };
    expect(t2LimitF(size)).toBeCloseTo(f, 3);
    expect(t2LimitBeta(size)).toBeCloseTo(beta, 3);
    expect(t2LimitChiSquared(size)).toBeCloseTo(chiSquared, 3);
  });

  test("too few samples for the components give no limit", () => {
    expect(() => t2LimitF({ n: 4, components: 4, confidence: 0.99 })).toThrow(
      /number of calibration samples is 4, expected at least 5/,
    );
    expect(() => t2LimitBeta({ n: 5, components: 4, confidence: 0.99 })).toThrow(/is 5, expected at least 6/);
    expect(() => t2LimitF({ n: 60, components: 4, confidence: 1 })).toThrow(LimitError);
  });
});

describe("the empirical quantile", () => {
  test("is of type 7: a straight line between the two values about position 1 + (n − 1)p", () => {
    expect(empiricalQuantile([40, 10, 20, 30], 0.5)).toBe(25);
    expect(empiricalQuantile([40, 10, 20, 30], 0.9)).toBeCloseTo(37, 12);
    expect(empiricalQuantile([7], 0.99)).toBe(7);
    expect(() => empiricalQuantile([], 0.5)).toThrow(LimitError);
  });
});

describe("a limit learnt from a reference period", () => {
  const minute = 60_000;
  const times = Array.from({ length: 2000 }, (_, i) => 1e12 + i * minute);
  const values = times.map((_, i) => 1 + (i % 10) / 10 + (i % 1000 === 5 ? 3 : 0));

  test("is a quantile of the largest values of blocks, and says on how much it rests", () => {
    const found = learntLimit({ times, values }, { confidence: 0.9, blockMs: 10 * minute });
    expect(found).toEqual({ limit: 1.9, blocks: 200, readings: 2000 });
  });

  test("wants ten blocks beyond the limit's confidence, not many readings of one hour", () => {
    expect(() => learntLimit({ times, values }, { confidence: 0.99, blockMs: 10 * minute })).toThrow(
      /200 blocks of 10 min with readings in them, expected at least 1000 to know the 99 % point/,
    );
  });

  test("refuses a reading that is no number", () => {
    const spoilt = values.with(7, Number.NaN);
    expect(() => learntLimit({ times, values: spoilt }, { confidence: 0.9, blockMs: minute })).toThrow(
      /value 8 .* is NaN/,
    );
  });
});
