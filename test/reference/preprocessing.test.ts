// Source: numpy 1.24.2 and scipy 1.10.1 (savgol_filter, mode "interp") on gasoline spectra; the integers of Savitzky & Golay, Anal. Chem. 36 (1964)
// 1627 as corrected by Steinier, Termonia & Deltour, Anal. Chem. 44 (1972) 1906 (from memory, proved equal to exact least squares).
import { describe, expect, test } from "vitest";
import {
  applySteps,
  axisFromSpec,
  compileSteps,
  type FittedStep,
  savitzkyGolayWeights,
} from "../../core/spectrum/index.ts";
import { expectAgreement } from "./agreement.ts";
import { referenceJson } from "./reference-json.ts";

interface Filtered {
  window: number;
  polyorder: number;
  deriv: number;
  values: number[][];
}
const reference = referenceJson<{
  wavelengths_nm: number[];
  raw: number[][];
  msc_reference: number[];
  snv: number[][];
  msc: { values: number[][] };
  detrend_linear: number[][];
  detrend_quadratic: number[][];
  snv_detrend_quadratic: number[][];
  savitzky_golay: Filtered[];
  sg_published_tables: {
    tables: { name: string; window: number; polyorder: number; deriv: number; norm: number; integers: number[] }[];
  };
}>("preprocessing.json");

const axis = axisFromSpec({ unit: "nm", points: reference.wavelengths_nm });
const raw = {
  axis,
  rows: reference.raw.map((row) => Float64Array.from(row)),
  names: reference.raw.map((_, i) => String(i)),
};

function expectSteps(steps: FittedStep[], expected: number[][], tolerance: number) {
  const stepped = applySteps(steps, raw).rows;
  const folded = compileSteps(steps, axis);
  expected.forEach((row, i) => {
    const out = new Float64Array(row.length);
    folded(raw.rows[i], out);
    expectAgreement(stepped[i], row, tolerance, `sample ${i}, one by one`);
    expectAgreement(out, row, tolerance, `sample ${i}, folded`);
  });
}

describe("steps on gasoline spectra, against numpy and scipy", () => {
  test("SNV", () => expectSteps([{ step: "snv" }], reference.snv, 1e-11));
  test("MSC", () => expectSteps([{ step: "msc", reference: reference.msc_reference }], reference.msc.values, 1e-11));
  test("detrend by a line", () => expectSteps([{ step: "detrend", order: 1 }], reference.detrend_linear, 1e-11));
  test("detrend by a parabola", () => expectSteps([{ step: "detrend", order: 2 }], reference.detrend_quadratic, 1e-11));
  test("SNV, then detrend by a parabola", () =>
    expectSteps([{ step: "snv" }, { step: "detrend", order: 2 }], reference.snv_detrend_quadratic, 1e-11));
  test.each(reference.savitzky_golay)(
    "Savitzky–Golay $window $polyorder $deriv, ends fitted",
    ({ window, polyorder: order, deriv: derivative, values }) =>
      expectSteps([{ step: "savitzky-golay", window, order, derivative }], values, 1e-11),
  );
});

describe("Savitzky–Golay weights, against the printed integers", () => {
  test.each(reference.sg_published_tables.tables)(
    "$name, $window points",
    ({ window, polyorder, deriv, norm, integers }) => {
      const middle = savitzkyGolayWeights(window, polyorder, deriv, 1)[(window - 1) / 2];
      expect(Array.from(middle, (weight) => Number((weight * norm).toFixed(9)) + 0)).toEqual(integers);
    },
  );
});
