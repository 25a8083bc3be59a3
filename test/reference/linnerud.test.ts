// Source: scikit-learn 1.2.1, PLSRegression(scale=True) iterated to convergence, on its Linnerud data (Tenenhaus 1998): three x, three y.
import { describe, test } from "vitest";
import { coefficientsOf, fitPls } from "../../core/pls/index.ts";
import { axisFromSpec, fitSteps, parseSteps } from "../../core/spectrum/index.ts";
import { column, expectAgreement } from "./agreement.ts";
import { referenceJson } from "./reference-json.ts";

interface Fitted {
  x_weights: number[][];
  y_loadings: number[][];
  x_loadings: number[][];
  x_rotations: number[][];
  x_scores: number[][];
  coef_raw_x: number[][];
  predictions: number[][];
}
const linnerud = referenceJson<{
  X: number[][];
  Y: number[][];
  x_std_ddof1: number[];
  converged: Record<string, Fitted>;
}>("sklearn-linnerud.json");
// The exercises are no spectrum, but nothing in the steps used here asks for one.
const spectra = {
  axis: axisFromSpec({ unit: "nm", points: [1, 2, 3] }),
  rows: linnerud.X.map((row) => Float64Array.from(row)),
  names: linnerud.X.map((_, i) => String(i)),
};
const y = linnerud.Y.map((row) => Float64Array.from(row));
const { after } = fitSteps(parseSteps("center; scale"), spectra);

describe.each([1, 2, 3])("Linnerud, three y, scaled, %i components", (components) => {
  const expected = linnerud.converged[`ncomp_${components}`];
  const fit = fitPls(after.rows, y, { components, scaleY: true });
  // a whole component may stand on its head
  const signs = fit.weights.map((w, a) =>
    Math.sign(w.reduce((sum, value, j) => sum + value * expected.x_weights[j][a], 0)),
  );
  const turned = (values: ArrayLike<number>, a: number) => Array.from(values, (value) => value * signs[a]);

  test("weights, loadings, rotations, scores and y-loadings are scikit-learn's but for the sign", () => {
    for (let a = 0; a < components; a++) {
      expectAgreement(turned(fit.weights[a], a), column(expected.x_weights, a), 1e-9, "W");
      expectAgreement(turned(fit.loadings[a], a), column(expected.x_loadings, a), 1e-9, "P");
      expectAgreement(turned(fit.rotations[a], a), column(expected.x_rotations, a), 1e-9, "R");
      expectAgreement(turned(column(fit.scores, a), a), column(expected.x_scores, a), 1e-9, "T");
      expectAgreement(turned(fit.yLoadings[a], a), column(expected.y_loadings, a), 1e-9, "Q");
    }
  });

  test("coefficients per unit of the exercises and predictions are scikit-learn's", () => {
    const b = coefficientsOf(fit.rotations, fit.yLoadings).map((row, k) =>
      row.map((value, j) => (value * fit.yDeviation[k]) / linnerud.x_std_ddof1[j]),
    );
    const predicted = after.rows.map((row) =>
      fit.yDeviation.map((deviation, k) => {
        const direction = coefficientsOf(fit.rotations, fit.yLoadings)[k];
        return fit.yMean[k] + deviation * row.reduce((sum, value, j) => sum + value * direction[j], 0);
      }),
    );
    for (let k = 0; k < 3; k++) {
      expectAgreement(b[k], column(expected.coef_raw_x, k), 1e-9, `B of y ${k + 1}`);
      expectAgreement(column(predicted, k), column(expected.predictions, k), 1e-11, `ŷ ${k + 1}`);
    }
  });
});
