// Source: R 4.2.2 on 25 invented pairs; the formulas stand in data/lab-agreement.json.
import { test } from "vitest";
import { errorStatistics } from "../../core/pls/index.ts";
import { expectEachClose } from "./agreement.ts";
import { referenceJson } from "./reference-json.ts";

const r = referenceJson<{
  reference: number[];
  predicted: number[];
  bias: number;
  rmsep: number;
  sep: number;
  reference_on_predicted: { slope: number; intercept: number };
  r2_about_1_to_1_line: number;
  rpd: number;
}>("lab-agreement.json");

test("bias, RMS, SEP, slope, R² and RPD are R's", () => {
  const { rms, bias, sep, slope, intercept, r2, rpd } = errorStatistics(r.predicted, r.reference);
  const { slope: b, intercept: a } = r.reference_on_predicted;
  expectEachClose(
    [rms, bias, sep!, slope!, intercept!, r2!, rpd!],
    [r.rmsep, r.bias, r.sep, b, a, r.r2_about_1_to_1_line, r.rpd],
    1e-10,
    "figure",
  );
});
