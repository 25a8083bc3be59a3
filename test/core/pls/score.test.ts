import { describe, expect, test } from "vitest";
import { defaultStatisticChoice, LimitError, statisticLimits } from "../../../core/limits/index.ts";
import type { Model } from "../../../core/model/index.ts";
import {
  calibrationPlaces,
  coefficientsOf,
  compileModel,
  FitError,
  newScore,
  regionsOf,
  rotationsOf,
  scoreInto,
} from "../../../core/pls/index.ts";
import { AxisError, axisFromSpec } from "../../../core/spectrum/index.ts";
import { inventedSpectra } from "../../bench/invented-spectra.ts";
import { expectAgreement } from "../../reference/agreement.ts";
import { smallModel } from "../model/small-model.ts";

const rows = inventedSpectra(12, 21, { ingredients: 3 }).spectra.rows;

function scored(model: Model, values: Float64Array) {
  const compiled = compileModel(model);
  const score = newScore(compiled);
  scoreInto(values, compiled, score);
  return score;
}

describe("scoring", () => {
  test("refuses a spectrum of another length, and hands NaN through to every figure", () => {
    expect(() => scored(smallModel(), new Float64Array(20))).toThrow(AxisError);
    expect(() => scored(smallModel(), new Float64Array(20))).toThrow(
      /20 values, expected 21, one for each point of the model's axis \(1000–2200 nm\)/,
    );
    const spoilt = Float64Array.from(rows[0]);
    spoilt[3] = Number.NaN;
    const { values, t2, q } = scored(smallModel(), spoilt);
    expect([values[0], t2, q]).toEqual([Number.NaN, Number.NaN, Number.NaN]);
    const flat = scored(smallModel(), new Float64Array(21).fill(0.4)); // SNV has nothing to divide by
    expect(Number.isFinite(flat.q)).toBe(false);
  });

  test("forgets the reading before", () => {
    const compiled = compileModel(smallModel());
    const [one, other] = [newScore(compiled), newScore(compiled)];
    scoreInto(new Float64Array(21).fill(Number.NaN), compiled, one);
    scoreInto(rows[1], compiled, one);
    scoreInto(rows[1], compiled, other);
    expect(one).toEqual(other);
  });

  test("finds a calibration sample at distance 0, and its T² and Q as the fit has them", () => {
    const model = smallModel();
    const compiled = compileModel(model);
    const places = calibrationPlaces(compiled, { t2: 2, q: 0.5 })!;
    rows.forEach((row, i) => {
      const score = scored(model, row);
      expect(score.nearest).toBeLessThan(1e-6);
      expectAgreement([score.t2, score.q], [places.fit.t2[i], places.fit.q[i]], 1e-9, "T², Q");
      expectAgreement(score.scores, places.scores[i], 1e-9, "t");
      expect(places.fit.t2Ratios[i]).toBe(places.fit.t2[i] / 2);
      expect(places.crossValidated!.qRatios[i]).toBe(places.crossValidated!.q[i] / 0.5);
    });
  });

  test("widens the uncertainty with leverage: t(0.975; n − A − 1) · SEC · √(1 + h), h = 1/n + T²/(n − 1)", () => {
    const model = smallModel();
    const { uncertainties, leverage, t2 } = scored(model, rows[2]);
    expect(leverage).toBeCloseTo(1 / 12 + t2 / 11, 12);
    // t(0.975; 9) = 2.262157 (printed tables)
    expect(uncertainties[0] / (2.262157 * model.properties[0].sec! * Math.sqrt(1 + leverage))).toBeCloseTo(1, 6);
  });
});

describe("a model that lacks something", () => {
  test("of coefficients alone predicts the same, and judges nothing", () => {
    const whole = smallModel();
    const floats = (list: number[][]) => list.map((row) => Float64Array.from(row));
    const b = coefficientsOf(rotationsOf(floats(whole.weights!), floats(whole.loadings!)), whole.yLoadings!);
    const {
      weights: _,
      loadings: __,
      yLoadings: ___,
      scores: ____,
      yScores: _____,
      residuals: ______,
      crossValidation: _______,
      ...rest
    } = whole;
    const bare: Model = { ...rest, components: 0, coefficients: b.map((row) => Array.from(row)) };
    const compiled = compileModel(bare);
    expect(compiled.judges).toEqual({ t2: false, q: false, nearest: false });
    const score = scored(bare, rows[4]);
    expectAgreement(score.values, scored(whole, rows[4]).values, 1e-10, "ŷ");
    expect([score.t2, score.q, score.leverage, score.nearest, score.uncertainties[0]]).toEqual(
      new Array(5).fill(Number.NaN),
    );
    expect(() => statisticLimits(bare)).toThrow(/model "small" is without calibration scores/);
  });

  test("without cross-validation has limits from the fit only when they are asked for", () => {
    const model = smallModel();
    model.residuals = { fit: model.residuals!.fit };
    expect(() => statisticLimits(model)).toThrow(LimitError);
    expect(() => statisticLimits(model)).toThrow(/without cross-validated residuals/);
    const choice = defaultStatisticChoice();
    const limits = statisticLimits(model, {
      ...choice,
      q: { method: "box", residuals: "fit", confidence: 0.99 },
      t2: { method: "fixed", number: 7 },
    });
    expect(limits.q).toBeGreaterThan(0);
    expect(limits.t2).toBe(7);
  });

  test("whose matrices do not belong together is refused when it is compiled", () => {
    const model = smallModel();
    model.weights![1] = model.weights![0];
    model.loadings![1] = model.loadings![0];
    expect(() => compileModel(model)).toThrow(FitError);
    const repeated = smallModel();
    for (const row of repeated.scores!) row[1] = row[0];
    expect(() => compileModel(repeated)).toThrow(/covariance of the calibration scores is singular/);
  });
});

describe("regions of contributions", () => {
  const axis = axisFromSpec({ unit: "nm", start: 1000, step: 4, count: 301 });
  const band = (at: number, width: number, height: number) =>
    Float64Array.from(axis.points, (x) => height * Math.exp(-0.5 * ((x - at) / width) ** 2));

  test("name a band by its wavelengths, sign and share, the largest first", () => {
    const contributions = band(1740, 12, 3).map((value, j) => value - band(1300, 10, 1)[j]);
    const [first, second, ...others] = regionsOf(contributions, axis);
    expect(others).toEqual([]);
    expect(first).toMatchObject({ unit: "nm", sign: 1 });
    expect(first.from).toBeLessThan(1740);
    expect(first.to).toBeGreaterThan(1740);
    expect(first.to - first.from).toBeLessThan(80);
    expect(second.sign).toBe(-1);
    expect(first.share).toBeCloseTo((3 * 12) / (3 * 12 + 10), 1);
    expect(first.share + second.share).toBeLessThanOrEqual(1);
  });

  test("are not split by noise that changes sign from channel to channel", () => {
    const noisy = band(1740, 20, 1).map((value, j) => value + (j % 2 === 0 ? 0.2 : -0.2));
    const [only, ...others] = regionsOf(noisy, axis);
    expect(others).toEqual([]);
    expect(only.from).toBeLessThan(1720);
    expect(only.to).toBeGreaterThan(1760);
    expect(only.share).toBeGreaterThan(0.15);
  });

  test("on a falling axis still run from the smaller to the larger number; nothing has no regions", () => {
    const falling = axisFromSpec({ unit: "cm-1", start: 2200, step: -4, count: 301 });
    const [{ from, to }] = regionsOf(band(1740, 12, 3), falling);
    expect(from).toBeLessThan(to);
    expect(regionsOf(new Float64Array(301), axis)).toEqual([]);
  });
});
