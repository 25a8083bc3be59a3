import { describe, expect, test } from "vitest";
import {
  boxLimit,
  boxMomentsLimit,
  calibrationT2,
  combinedIndex,
  combinedLimit,
  jacksonMudholkarLimit,
  qLimit,
  scoreSpaceOf,
  t2LimitBeta,
  t2LimitF,
} from "../../../core/limits/index.ts";
import { calibrate, compileModel, interleaved, newScore, scoreInto, seededRandom } from "../../../core/pls/index.ts";
import { axisFromSpec, parseSteps } from "../../../core/spectrum/index.ts";
import { normalOf } from "../../bench/invented-spectra.ts";

// Limits are promises about readings that nobody has seen yet; here such readings are drawn and counted. Seeded: every run counts the same.

/** Share of `draws` beyond a limit, with how far chance alone may move it (three standard errors of independent draws). */
function expectShare(beyond: number, draws: number, nominal: number) {
  const share = beyond / draws;
  const chance = 3 * Math.sqrt((nominal * (1 - nominal)) / draws);
  expect(Math.abs(share - nominal), `share ${share} of ${draws}, nominal ${nominal}, chance ±${chance}`).toBeLessThan(
    chance,
  );
}

describe("T² on normal draws: 4 components, 30 calibration samples", () => {
  const [n, A, calibrations] = [30, 4, 12_000];
  const normal = normalOf(seededRandom(11));

  // One new draw a calibration, so that the draws are independent: 12 000 of each.
  const counts = { f95: 0, f99: 0, beta95: 0, beta99: 0 };
  for (let k = 0; k < calibrations; k++) {
    const raw = Array.from({ length: n }, () => Array.from({ length: A }, normal));
    const mean = Array.from({ length: A }, (_, a) => raw.reduce((sum, row) => sum + row[a], 0) / n);
    const space = scoreSpaceOf(raw.map((row) => row.map((value, a) => value - mean[a])));
    const fresh = Array.from({ length: A }, normal).map((value, a) => value - mean[a]);
    const size = (confidence: number) => ({ n, components: A, confidence });
    const t2New = t2Of(space.whiten, fresh);
    const t2Own = calibrationT2(space)[k % n];
    if (t2New > t2LimitF(size(0.95))) counts.f95++;
    if (t2New > t2LimitF(size(0.99))) counts.f99++;
    if (t2Own > t2LimitBeta(size(0.95))) counts.beta95++;
    if (t2Own > t2LimitBeta(size(0.99))) counts.beta99++;
  }

  test("the F limit is exceeded by 5 % and 1 % of 12 000 new draws", () => {
    expectShare(counts.f95, calibrations, 0.05);
    expectShare(counts.f99, calibrations, 0.01);
  });

  test("the beta limit is exceeded by 5 % and 1 % of 12 000 calibration samples", () => {
    expectShare(counts.beta95, calibrations, 0.05);
    expectShare(counts.beta99, calibrations, 0.01);
  });
});

describe("Q on normal residuals with eigenvalues 1, ½ … 1/128", () => {
  const eigenvalues = Array.from({ length: 8 }, (_, k) => 2 ** -k);
  const draws = 40_000;
  const normal = normalOf(seededRandom(5));
  const residualQ = () => eigenvalues.reduce((sum, value) => sum + value * normal() ** 2, 0);
  const q = Array.from({ length: draws }, residualQ);
  const share = (limit: number) => q.filter((value) => value > limit).length / draws;

  // The formulas are approximations to the tail of a sum of squares: their true shares here are 4.6 and 0.75 % (Jackson & Mudholkar), 4.9 and
  // 1.2 % (Box), as a convolution of the densities gives them too; within half the nominal share is what they promise.
  test.each([
    ["Jackson & Mudholkar", jacksonMudholkarLimit],
    ["Box", boxLimit],
  ])("%s: within half of the nominal 5 %% and 1 %% of 40 000 draws", (_, limit) => {
    expect(share(limit(eigenvalues, 0.95))).toBeGreaterThan(0.04);
    expect(share(limit(eigenvalues, 0.95))).toBeLessThan(0.06);
    expect(share(limit(eigenvalues, 0.99))).toBeGreaterThan(0.005);
    expect(share(limit(eigenvalues, 0.99))).toBeLessThan(0.015);
  });

  test("Box by moments, from 4 000 values seen before, too", () => {
    const limit = boxMomentsLimit(Array.from({ length: 4000 }, residualQ), 0.99);
    expect(share(limit)).toBeGreaterThan(0.005);
    expect(share(limit)).toBeLessThan(0.015);
  });

  test("the combined index of 3 components and these residuals is exceeded by about 1 % of 40 000 draws", () => {
    const limits = { t2: 11.345, q: boxLimit(eigenvalues, 0.99) };
    const limit = combinedLimit(eigenvalues, 3, limits, 0.99);
    const beyond = q.filter(
      (value) => combinedIndex({ t2: normal() ** 2 + normal() ** 2 + normal() ** 2, q: value }, limits) > limit,
    );
    expect(beyond.length / draws).toBeGreaterThan(0.007);
    expect(beyond.length / draws).toBeLessThan(0.014);
  });
});

describe("Q of new spectra: 4 ingredients, 100 channels of white noise, 60 calibration samples, nominal 1 %", () => {
  const [channels, ingredients, n, perModel, models] = [100, 4, 60, 400, 12];
  const axis = axisFromSpec({ unit: "nm", start: 1000, step: 10, count: channels });
  const random = seededRandom(3);
  const normal = normalOf(random);
  const bands = Array.from({ length: ingredients }, (_, k) =>
    axis.points.map((x) => Math.exp(-0.5 * ((x - 1150 - 200 * k) / 80) ** 2)),
  );
  const draw = () => {
    const amounts = Array.from({ length: ingredients }, () => 1 + 0.3 * normal());
    const spectrum = axis.points.map(
      (_, j) => bands.reduce((sum, band, k) => sum + amounts[k] * band[j], 0) + 0.01 * normal(),
    );
    return { spectrum, y: amounts[0] + 0.01 * normal() };
  };

  const beyond = { crossValidated: 0, fit: 0, t2: 0 };
  for (let k = 0; k < models; k++) {
    const set = Array.from({ length: n }, draw);
    const { model } = calibrate(
      {
        spectra: { axis, rows: set.map(({ spectrum }) => spectrum), names: set.map((_, i) => String(i)) },
        y: set.map(({ y }) => Float64Array.of(y)),
        propertyNames: ["y"],
      },
      {
        name: "m",
        created: "2026-01-01T00:00:00Z",
        steps: parseSteps("center"),
        components: 4,
        mostComponents: 4,
        segments: interleaved(n, 20),
        validation: "folds:20",
      },
    );
    const compiled = compileModel(model);
    const score = newScore(compiled);
    const at = (residuals: "cross-validated" | "fit") =>
      qLimit(model, { method: "box-moments", residuals, confidence: 0.99 });
    const limits = {
      crossValidated: at("cross-validated"),
      fit: at("fit"),
      t2: t2LimitF({ n, components: 4, confidence: 0.99 }),
    };
    for (let i = 0; i < perModel; i++) {
      scoreInto(draw().spectrum, compiled, score);
      if (score.q > limits.crossValidated) beyond.crossValidated++;
      if (score.q > limits.fit) beyond.fit++;
      if (score.t2 > limits.t2) beyond.t2++;
    }
  }
  const readings = perModel * models;

  // The draws of this seed: 16 % beyond the limit from the fit, 1 % beyond the one from cross-validation.
  test("limits from residuals of the fit flag more than a tenth of 4 800 healthy readings", () => {
    expect(beyond.fit / readings).toBeGreaterThan(0.1);
  });

  test("limits from cross-validated residuals flag about one in a hundred", () => {
    expect(beyond.crossValidated / readings).toBeGreaterThan(0.002);
    expect(beyond.crossValidated / readings).toBeLessThan(0.02);
  });

  test("the F limit of T² flags about one in a hundred of the same readings", () => {
    expect(beyond.t2 / readings).toBeGreaterThan(0.003);
    expect(beyond.t2 / readings).toBeLessThan(0.02);
  });
});

function t2Of(whiten: Float64Array, t: readonly number[]): number {
  let sum = 0;
  t.forEach((_, a) => {
    let z = 0;
    for (let b = 0; b <= a; b++) z += whiten[a * t.length + b] * t[b];
    sum += z * z;
  });
  return sum;
}
