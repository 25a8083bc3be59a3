// Source: R 4.2.2 with pls 2.8-1 (oscorespls, simpls) and the vignette "Introduction to the pls Package" that comes with it; data: Kalivas,
// Chemom. Intell. Lab. Syst. 37 (1997) 255. Rows 1–50 to fit, 51–60 to test, mean-centred. See README.md.
import { describe, expect, test } from "vitest";
import { coefficientsOf, crossValidate, errorStatistics, fitPls, leaveOneOut, rmsecvOf } from "../../core/pls/index.ts";
import { applySteps, fitSteps, parseSteps } from "../../core/spectrum/index.ts";
import { column, expectAgreement } from "./agreement.ts";
import { gasoline, gasolinePls, gasolineTest } from "./gasoline.ts";

const { oscorespls, published, rmsep } = gasolinePls;
const steps = parseSteps("center");
const { fitted, after } = fitSteps(steps, gasoline.spectra);
const fit = fitPls(after.rows, gasoline.y, { components: 8, scaleY: false });
const testRows = applySteps(fitted, gasolineTest.spectra).rows;
const octane = column(gasoline.y, 0);
const octaneTest = column(gasolineTest.y, 0);
const validated = crossValidate(gasoline, { steps, components: 10, scaleY: false, segments: leaveOneOut(50) });

function predictedWith(components: number, rows: readonly Float64Array[]): number[] {
  if (components === 0) return rows.map(() => fit.yMean[0]);
  const [b] = coefficientsOf(fit.rotations, fit.yLoadings, components);
  return rows.map((row) => row.reduce((sum, value, j) => sum + value * b[j], fit.yMean[0]));
}

describe("gasoline, against R's oscorespls with 1 to 8 components", () => {
  test.each([0, 1, 2, 3, 4, 5, 6, 7])(
    "weights, loadings, rotations, scores and y-loadings of component %i are R's",
    (a) => {
      expectAgreement(fit.weights[a], column(oscorespls.W, a), 1e-10, "W", 1);
      expectAgreement(fit.loadings[a], column(oscorespls.P, a), 1e-10, "P", 1);
      expectAgreement(fit.rotations[a], column(oscorespls.R, a), 1e-10, "R", 1);
      expectAgreement(column(fit.scores, a), column(oscorespls.T, a), 1e-10, "T", 1);
      expectAgreement(fit.yLoadings[a], column(oscorespls.Q, a), 1e-10, "Q");
      // R's u is the deflated y itself; ours is divided by the y-loading, as u = Y q / qᵀq says
      expectAgreement(
        column(fit.yScores, a).map((u) => u * fit.yLoadings[a][0]),
        column(oscorespls.U, a),
        1e-10,
        "U",
      );
    },
  );

  test.each([1, 2, 3, 4, 5, 6, 7, 8])(
    "coefficients and intercept with %i components are R's, and simpls'",
    (components) => {
      const [b] = coefficientsOf(fit.rotations, fit.yLoadings, components);
      expectAgreement(b, oscorespls.coef_by_ncomp[components - 1], 1e-9, "B");
      expectAgreement(b, gasolinePls.simpls.coef_by_ncomp[components - 1], 1e-7, "B of simpls");
      const intercept = fit.yMean[0] - b.reduce((sum, value, j) => sum + value * gasolinePls.x_mean[j], 0);
      expectAgreement([intercept], [oscorespls.intercept_by_ncomp[components - 1]], 1e-10, "intercept");
    },
  );

  test.each([1, 2, 3, 4, 5, 6, 7, 8])("predictions of the test rows with %i components are R's", (components) => {
    expectAgreement(
      predictedWith(components, testRows),
      gasolinePls.predicted_test_by_ncomp[components - 1],
      1e-11,
      "ŷ",
    );
  });

  test.each([1, 2, 3, 4, 5, 6, 7, 8])("leave-one-out predictions with %i components are R's", (components) => {
    expectAgreement(
      column(validated.predicted[components], 0),
      gasolinePls.loo_predicted_by_ncomp[components - 1],
      1e-11,
      "ŷ",
    );
  });

  test("RMSECV, RMSEP and RMSEC by number of components are R's", () => {
    const columns = validated.predicted.map((rows) => column(rows, 0));
    expectAgreement(rmsecvOf(columns, octane).slice(0, 9), rmsep.loo_cv, 1e-10, "RMSECV");
    const rms = (rows: readonly Float64Array[], reference: number[]) =>
      Array.from({ length: 9 }, (_, a) => errorStatistics(predictedWith(a, rows), reference).rms);
    expectAgreement(rms(testRows, octaneTest), rmsep.test, 1e-10, "RMSEP");
    expectAgreement(rms(after.rows, octane), rmsep.train, 1e-10, "RMSEC");
  });

  test("explained variance of X and y is R's", () => {
    const total = after.rows.flatMap((row) => Array.from(row)).reduce((sum, value) => sum + value * value, 0);
    let explained = 0;
    const percent = fit.loadings.map((p, a) => {
      const t = column(fit.scores, a);
      explained += (dot(p, p) * dot(t, t)) / total;
      return 100 * explained;
    });
    expectAgreement(percent, gasolinePls.explained_x_variance.percent_cumulative, 1e-10, "X %");
    const r2 = fit.loadings.map((_, a) => 100 * errorStatistics(predictedWith(a + 1, after.rows), octane).r2!);
    expectAgreement(r2, gasolinePls.explained_y_variance.percent_cumulative, 1e-10, "y %");
  });
});

// Printed with four significant digits (percentages and predictions with two decimals), so compared with as many.
describe("gasoline, as the vignette prints it", () => {
  const columns = validated.predicted.map((rows) => column(rows, 0));
  const rmsecv = rmsecvOf(columns, octane);

  test.each(published.rmsep_loo_cv_0_to_10.map((printed, a) => [a, printed]))(
    "with %i components the leave-one-out RMSECV is %f",
    (a, printed) => {
      expect(fourDigits(rmsecv[a])).toBe(printed);
    },
  );

  test.each(published.rmsep_test_0_to_10.slice(0, 9).map((printed, a) => [a, printed]))(
    "with %i components the RMSEP of rows 51–60 is %f",
    (a, printed) => {
      expect(errorStatistics(predictedWith(a, testRows), octaneTest).rms).toBeCloseTo(printed, 4);
    },
  );

  test("two and three components predict rows 51–60 as printed", () => {
    const two = predictedWith(2, testRows).map((value) => Number(value.toFixed(2)));
    const three = predictedWith(3, testRows).map((value) => Number(value.toFixed(2)));
    expect(two).toEqual(published.predicted_test_2_comps_rows_51_to_60);
    expect(three.slice(0, 5)).toEqual(published.predicted_test_3_comps_rows_51_to_55);
  });
});

function fourDigits(value: number): number {
  return Number(value.toPrecision(4));
}

function dot(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}
