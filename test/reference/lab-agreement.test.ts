// Source: R 4.2.2 on 25 invented pairs, and 10 further ones with a bias that grows; the formulas stand in data/lab-agreement.json.
import { describe, expect, test } from "vitest";
import {
  agreementStatistics,
  biasTest,
  controlCharts,
  ewmaChart,
  furthest,
  grubbsCritical,
  lineThrough,
  movingRanges,
  runsOf,
  shortTermSigma,
} from "../../core/agreement/index.ts";
import { fQuantile, fUpperTail } from "../../core/limits/index.ts";
import { expectAgreement, expectEachClose } from "./agreement.ts";
import { referenceJson } from "./reference-json.ts";

interface Regression {
  slope: number;
  intercept: number;
  se_slope: number;
  se_intercept: number;
  slope_ci_95: number[];
  intercept_ci_95: number[];
  t_slope_equals_1: number;
  p_slope_equals_1: number;
  r_squared: number;
}
const r = referenceJson<{
  reference: number[];
  predicted: number[];
  residuals: number[];
  bias: number;
  rmsep: number;
  sep: number;
  bias_t_test: { t: number; p_two_sided: number; confidence_interval_95: number[] };
  predicted_on_reference: Regression;
  reference_on_predicted: Regression;
  individuals_chart: {
    centre: number;
    mr_bar: number;
    mr_ucl: number;
    moving_ranges: number[];
    ucl_exact_constant: number;
    lcl_exact_constant: number;
  };
  ewma: { z: number[]; ucl: number[]; lcl: number[] };
  phase_2: {
    residuals: number[];
    ewma_z: number[];
    ewma_ucl: number[];
    individuals_signal_index_1based: number[];
    ewma_signal_index_1based: number[];
  };
  grubbs: {
    G: number;
    index_1based: number;
    "critical_two_sided_0.05": number;
    "critical_two_sided_0.01": number;
    published: { two_sided: { n: number[]; "alpha_0.05": number[]; "alpha_0.01": number[] } };
  };
}>("lab-agreement.json");
const n = r.residuals.length;

describe("statistics of 25 pairs are R's", () => {
  const found = agreementStatistics(r.predicted, r.reference, { rmsecv: 0.15, freedom: 40 });

  test("bias with its interval, t and p", () => {
    const { bias, biasTest: t } = found;
    const { t: statistic, p_two_sided, confidence_interval_95 } = r.bias_t_test;
    expectEachClose(
      [bias.value, bias.low!, bias.high!, t.statistic!, t.p],
      [r.bias, ...confidence_interval_95, statistic, p_two_sided],
      1e-10,
      "bias",
    );
  });

  test("RMSEP and SEP, and the intervals of SEP by χ² and of RMSEP around them", () => {
    expectEachClose([found.rmsep.value, found.sep.value], [r.rmsep, r.sep], 1e-10, "error");
    // χ² with 24 degrees of freedom, table of the NIST/SEMATECH e-Handbook 1.3.6.7.4: 12.401 and 39.364
    expect(found.sep.low).toBeCloseTo(r.sep * Math.sqrt(24 / 39.364), 5);
    expect(found.sep.high).toBeCloseTo(r.sep * Math.sqrt(24 / 12.401), 5);
    // with 25: 13.120 and 40.646
    expect(found.rmsep.low).toBeCloseTo(r.rmsep * Math.sqrt(25 / 40.646), 5);
    expect(found.rmsep.high).toBeCloseTo(r.rmsep * Math.sqrt(25 / 13.12), 5);
  });

  test("slope and intercept of the laboratory on the predictions, with their intervals", () => {
    const { slope, intercept, slope_ci_95, intercept_ci_95, t_slope_equals_1, p_slope_equals_1, r_squared } =
      r.reference_on_predicted;
    expectEachClose(
      [found.slope!.value, found.slope!.low!, found.slope!.high!, found.intercept!.value, found.intercept!.low!],
      [slope, ...slope_ci_95, intercept, intercept_ci_95[0]],
      1e-9,
      "line",
    );
    const { slopeTest, r2 } = found;
    expectEachClose(
      [slopeTest!.statistic!, slopeTest!.p, r2!.value],
      [t_slope_equals_1, p_slope_equals_1, r_squared],
      1e-9,
      "slope = 1, R²",
    );
  });

  test("the line the other way round, with its standard errors", () => {
    const { slope, intercept, slopeError, interceptError } = lineThrough(r.reference, r.predicted)!;
    const { se_slope, se_intercept, ...other } = r.predicted_on_reference;
    expectEachClose(
      [slope, intercept, slopeError, interceptError],
      [other.slope, other.intercept, se_slope, se_intercept],
      1e-9,
      "line",
    );
  });

  // From memory: the printed table of the 5 % points of F has 1.79 at 24 and 40 degrees of freedom.
  test("SEP is compared with RMSECV by F: at the printed 5 % point p is 5 %", () => {
    expect(fQuantile(0.95, 24, 40)).toBeCloseTo(1.79, 2);
    expect(fUpperTail(fQuantile(0.95, 24, 40), 24, 40)).toBeCloseTo(0.05, 10);
    expect(found.sepTest!.statistic).toBeCloseTo((r.sep / 0.15) ** 2, 10);
    expect(found.sepTest!.p).toBeGreaterThan(0.05); // (0.187/0.15)² = 1.56 < 1.79
  });
});

describe("control charts of 25 pairs are R's", () => {
  const { individuals_chart: chart, ewma, phase_2 } = r;
  const charts = controlCharts(r.residuals, n)!;

  test("individuals and moving ranges", () => {
    const { centre, low, high } = charts.individuals;
    expectAgreement(
      [centre, low, high],
      [chart.centre, chart.lcl_exact_constant, chart.ucl_exact_constant],
      1e-10,
      "limits",
    );
    expectAgreement(movingRanges(r.residuals), chart.moving_ranges, 1e-10, "moving range");
    expect(charts.movingRangeHigh).toBeCloseTo(chart.mr_ucl, 10);
  });

  // Factors of individuals charts, as tables of control charts print them: 2.66 (E₂) and 3.267 (D₄).
  test("limits are 2.66 and 3.267 mean moving ranges", () => {
    const { centre, high } = charts.individuals;
    expect((high - centre) / chart.mr_bar).toBeCloseTo(2.66, 2);
    expect(charts.movingRangeHigh / chart.mr_bar).toBeCloseTo(3.267, 10);
  });

  // R's file takes σ with the printed 1.128, we 2/√π = 1.12838: the limits' width differs by 3 in 10 000, so it is compared by its share.
  test("EWMA, and limits that open out", () => {
    expectAgreement(charts.ewma.z, ewma.z, 1e-10, "z");
    const wider = (high: number) => high - chart.centre;
    expectAgreement(charts.ewma.high.map(wider), ewma.ucl.map(wider), 4e-4, "EWMA limit");
    expectAgreement(charts.ewma.low.map(wider), ewma.lcl.map(wider), 4e-4, "EWMA limit");
  });

  test("a growing bias gives the same signals: EWMA from the 7th pair, individuals at the 10th", () => {
    const sigma = shortTermSigma(r.residuals);
    const { z, high } = ewmaChart(phase_2.residuals, chart.centre, sigma);
    expectAgreement(z, phase_2.ewma_z, 1e-10, "z");
    const signals = z.flatMap((value, i) => (value > high[i] ? [i + 1] : []));
    expect(signals).toEqual(phase_2.ewma_signal_index_1based);
    const all = controlCharts([...r.residuals, ...phase_2.residuals], n)!;
    const individuals = all.signals
      .filter((signal) => signal.chart === "individuals")
      .map(({ index }) => index - n + 1);
    expect(individuals).toEqual(phase_2.individuals_signal_index_1based);
  });

  test("the bias that grows is found as a stretch of its own, and the 25 pairs before it are not cut", () => {
    const runs = runsOf([...r.residuals, ...phase_2.residuals]);
    expect(runs).toHaveLength(2);
    expect(runs[0].last).toBeGreaterThan(n - 4);
    const grown = biasTest([...r.residuals, ...phase_2.residuals].slice(runs[1].first));
    expect(grown.p).toBeLessThan(0.001);
    expect(runsOf(r.residuals)).toEqual([{ first: 0, last: n - 1 }]);
  });
});

describe("Grubbs' test is R's", () => {
  const { grubbs } = r;

  test("G, where it is, and its critical values", () => {
    const { index, g } = furthest(r.residuals);
    expect(index + 1).toBe(grubbs.index_1based);
    expectEachClose(
      [g, grubbsCritical(n, 0.05), grubbsCritical(n, 0.01)],
      [grubbs.G, grubbs["critical_two_sided_0.05"], grubbs["critical_two_sided_0.01"]],
      1e-9,
      "G",
    );
  });

  const { n: sizes, ...columns } = grubbs.published.two_sided;
  test.each(sizes.map((size, i) => [size, columns["alpha_0.05"][i], columns["alpha_0.01"][i]]))(
    "critical values of %i results are as printed: %f and %f",
    (size, five, one) => {
      // The table rounds now up, now down, in its last digit.
      expect(Math.abs(grubbsCritical(size, 0.05) - five)).toBeLessThan(0.0011);
      expect(Math.abs(grubbsCritical(size, 0.01) - one)).toBeLessThan(0.0011);
    },
  );
});
