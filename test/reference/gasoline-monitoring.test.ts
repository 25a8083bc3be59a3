// Source: figures computed in R 4.2.2 from the formulas that stand in data/gasoline-monitoring.json (written there from memory of Tracy, Young &
// Mason 1992, Jackson & Mudholkar 1979, Box 1954, Nomikos & MacGregor 1995, Yue & Qin 2001, Westerhuis et al. 2000, ASTM E1655).
import { describe, expect, test } from "vitest";
import {
  boxLimit,
  calibrationNearest,
  calibrationT2,
  combinedIndex,
  combinedLimit,
  jacksonMudholkarLimit,
  type StatisticChoice,
  scoreSpaceOf,
  statisticLimits,
  t2LimitChiSquared,
} from "../../core/limits/index.ts";
import { calibrate, compileModel, explain, leaveOneOut, newScore, scoreInto } from "../../core/pls/index.ts";
import { parseSteps } from "../../core/spectrum/index.ts";
import { expectAgreement, expectEachClose } from "./agreement.ts";
import { gasoline, gasolineMonitoring, gasolinePls, gasolineTest } from "./gasoline.ts";

describe.each([2, 3, 4, 5])("gasoline with %i components", (components) => {
  const expected = gasolineMonitoring[`ncomp_${components}`];
  const { model } = calibrate(gasoline, {
    name: "gasoline",
    created: "2026-01-01T00:00:00Z",
    steps: parseSteps("center"),
    components,
    mostComponents: components,
    segments: leaveOneOut(50),
    validation: "loo",
  });
  const scoredAt = (confidence: number) => {
    const compiled = compileModel(model, { confidence });
    return gasolineTest.spectra.rows.map((row) => {
      const score = newScore(compiled);
      scoreInto(row, compiled, score);
      return score;
    });
  };
  const scored = scoredAt(0.95);
  const choice = (
    t2: "f" | "beta" | "chi-squared",
    q: "jackson-mudholkar" | "box" | "box-moments" | "empirical",
    confidence: number,
  ): StatisticChoice => ({
    t2: { method: t2, confidence },
    q: { method: q, residuals: "fit", confidence },
    nearest: { method: "largest" },
  });

  test("predictions of rows 51–60 are R's", () => {
    expectAgreement(
      scored.map(({ values }) => values[0]),
      gasolinePls.predicted_test_by_ncomp[components - 1],
      1e-11,
      "ŷ",
    );
  });

  test("scores, T², Q, leverage and the nearest sample of rows 51–60 are R's", () => {
    expectAgreement(
      scored.flatMap(({ scores }) => Array.from(scores)),
      expected.scores_test.flat(),
      1e-11,
      "t",
    );
    expectEachClose(
      scored.map(({ t2 }) => t2),
      expected.T2_test,
      1e-9,
      "T²",
    );
    expectEachClose(
      scored.map(({ q }) => q),
      expected.Q_test,
      1e-9,
      "Q",
    );
    expectEachClose(
      scored.map(({ leverage }) => leverage),
      expected.leverage_with_mean_test,
      1e-9,
      "leverage",
    );
    expectEachClose(
      scored.map(({ nearest }) => nearest),
      expected.nearest_neighbour.nn_mahalanobis_test,
      1e-9,
      "nearest",
    );
  });

  test("T², Q and nearest neighbours of the calibration rows are R's", () => {
    const space = scoreSpaceOf(model.scores!);
    expectEachClose(calibrationT2(space), expected.T2_train, 1e-9, "T²");
    expectEachClose(model.residuals!.fit.q, expected.Q_train, 1e-9, "Q");
    expectEachClose(calibrationNearest(space), expected.nearest_neighbour.nn_mahalanobis_train, 1e-9, "nearest");
    expectEachClose(model.residuals!.fit.eigenvalues.slice(0, 10), expected.residual_eigenvalues_first_10, 1e-9, "λ");
  });

  test.each([0.05, 0.01])("the limits of T², Q and the nearest sample at α = %f are R's", (alpha) => {
    const listed = expected.limits[`alpha_${alpha}`];
    const confidence = 1 - alpha;
    const f = statisticLimits(model, choice("f", "jackson-mudholkar", confidence));
    const beta = statisticLimits(model, choice("beta", "box", confidence));
    const moments = statisticLimits(model, choice("chi-squared", "box-moments", confidence));
    const empirical = statisticLimits(model, choice("f", "empirical", confidence));
    expectEachClose(
      [f.t2, beta.t2, moments.t2],
      [listed.T2_limit_F, listed.T2_limit_beta, listed.T2_limit_chi2],
      1e-9,
      "T²",
    );
    expectEachClose(
      [f.q, beta.q, moments.q, empirical.q],
      [
        listed.Q_limit_jackson_mudholkar,
        listed.Q_limit_box_theta,
        listed.Q_limit_box_moments,
        listed.Q_limit_empirical,
      ],
      1e-9,
      "Q",
    );
    expectEachClose([f.nearest], [expected.nearest_neighbour.train_max_nn_mahalanobis], 1e-9, "nearest");
  });

  test.each([0.05, 0.01] as const)("the combined index and its limit at α = %f are R's", (alpha) => {
    const { variant_chi2, variant_F } = expected.combined_index[`alpha_${alpha}`];
    const { eigenvalues } = model.residuals!.fit;
    for (const { tau2, delta2, limit, phi_test } of [variant_chi2, variant_F]) {
      const limits = { t2: tau2, q: delta2 };
      expectEachClose([combinedLimit(eigenvalues, components, limits, 1 - alpha)], [limit], 1e-9, "limit");
      expectEachClose(
        scored.map((score) => combinedIndex(score, limits)),
        phi_test,
        1e-9,
        "φ",
      );
    }
    expect(t2LimitChiSquared({ n: 50, components, confidence: 1 - alpha })).toBeCloseTo(variant_chi2.tau2, 9);
  });

  test("contributions of row 51 to T² and Q are R's and add up to the statistic", () => {
    const found = explain(gasolineTest.spectra.rows[0], compileModel(model));
    const { T2_contributions, Q_contributions, residual } = expected.contributions_test_row_1;
    expectAgreement(found.t2, T2_contributions, 1e-9, "T²");
    expectAgreement(found.q.map(Math.abs), Q_contributions, 1e-9, "Q");
    expectAgreement(found.residual, residual, 1e-9, "e");
    expectAgreement([sum(found.t2), sum(found.q.map(Math.abs))], [scored[0].t2, scored[0].q], 1e-12, "sums");
  });

  test.each([0.05, 0.01])("the half width of the interval at α = %f is R's", (alpha) => {
    const { half_width_test } = expected.prediction_uncertainty[`alpha_${alpha}` as "alpha_0.05" | "alpha_0.01"];
    const found = scoredAt(1 - alpha).map(({ uncertainties }) => uncertainties[0]);
    expectEachClose(found, half_width_test, 1e-9, "U");
    expectEachClose([model.properties[0].sec!], [expected.prediction_uncertainty.SEC], 1e-9, "SEC");
  });
});

test("with three components h₀ is negative, and the Jackson–Mudholkar limit keeps to Box's all the same", () => {
  const expected = gasolineMonitoring["ncomp_3"];
  expect(expected.h0).toBeLessThan(0);
  const eigenvalues = expected.residual_eigenvalues_first_10;
  const ratio = jacksonMudholkarLimit(eigenvalues, 0.95) / boxLimit(eigenvalues, 0.95);
  expect(ratio).toBeGreaterThan(0.9); // with the deviate of the wrong sign it would be 0.09
  expect(ratio).toBeLessThan(1.2);
});

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0);
}
