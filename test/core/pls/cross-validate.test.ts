import { describe, expect, test } from "vitest";
import {
  byGroup,
  coefficientsOf,
  contiguous,
  crossValidate,
  FitError,
  fitPls,
  interleaved,
  leaveOneOut,
  randomly,
  recommendComponents,
  seededRandom,
} from "../../../core/pls/index.ts";
import { applySteps, fitSteps, parseSteps } from "../../../core/spectrum/index.ts";
import { inventedSpectra } from "../../bench/invented-spectra.ts";
import { expectAgreement } from "../../reference/agreement.ts";

describe("segments", () => {
  const all = (segments: readonly (readonly number[])[]) => segments.flat().sort((a, b) => a - b);
  const ten = Array.from({ length: 10 }, (_, i) => i);

  test.each([
    ["leave-one-out", leaveOneOut(10), 10],
    ["contiguous", contiguous(10, 3), 3],
    ["interleaved", interleaved(10, 3), 3],
    ["random", randomly(10, 3, seededRandom(1)), 3],
  ])("%s: every sample is held out once", (_, segments, count) => {
    expect(segments.length).toBe(count);
    expect(all(segments)).toEqual(ten);
    const sizes = segments.map(({ length }) => length);
    expect(Math.max(...sizes) - Math.min(...sizes)).toBeLessThanOrEqual(1);
  });

  test("contiguous keeps neighbours together, interleaved parts them, groups stay whole", () => {
    expect(contiguous(6, 2)).toEqual([
      [0, 1, 2],
      [3, 4, 5],
    ]);
    expect(interleaved(6, 2)).toEqual([
      [0, 2, 4],
      [1, 3, 5],
    ]);
    expect(byGroup(["a", "b", "a", "c", "b"])).toEqual([[0, 2], [1, 4], [3]]);
  });

  test("random ones are the same for the same seed, and others for another", () => {
    expect(randomly(20, 4, seededRandom(7))).toEqual(randomly(20, 4, seededRandom(7)));
    expect(randomly(20, 4, seededRandom(7))).not.toEqual(randomly(20, 4, seededRandom(8)));
  });

  test("too few or too many folds, or one group only, are refused", () => {
    expect(() => contiguous(5, 1)).toThrow(/number of folds is 1, expected 2 to 5/);
    expect(() => interleaved(5, 6)).toThrow(FitError);
    expect(() => byGroup(["a", "a"])).toThrow(/column group is 1 group, expected at least 2/);
  });
});

describe("cross-validation", () => {
  const set = inventedSpectra(14, 31, { ingredients: 3 });
  const steps = parseSteps("msc; savitzky-golay 5 2 1; center; scale");
  const segments = interleaved(14, 4);
  const found = crossValidate(set, { steps, components: 4, scaleY: true, segments, keepAt: 2 });

  test("refits every step and the model without the segment", () => {
    for (const segment of segments) {
      const rest = set.y.map((_, i) => i).filter((i) => !segment.includes(i));
      const pick = <T>(list: readonly T[], of: readonly number[]) => of.map((i) => list[i]);
      const part = (of: readonly number[]) => ({
        ...set.spectra,
        rows: pick(set.spectra.rows, of),
        names: pick(set.spectra.names, of),
      });
      const { fitted, after } = fitSteps(steps, part(rest));
      const fit = fitPls(after.rows, pick(set.y, rest), { components: 2, scaleY: true });
      const [b] = coefficientsOf(fit.rotations, fit.yLoadings);
      const held = applySteps(fitted, part(segment)).rows;
      segment.forEach((i, k) => {
        const yHat = fit.yMean[0] + fit.yDeviation[0] * held[k].reduce((sum, value, j) => sum + value * b[j], 0);
        expectAgreement(found.predicted[2][i], [yHat], 1e-10, `ŷ of sample ${i}`);
        const t = fit.rotations.map((r) => held[k].reduce((sum, value, j) => sum + value * r[j], 0));
        const e = held[k].map((value, j) => value - t.reduce((sum, score, a) => sum + score * fit.loadings[a][j], 0));
        expectAgreement([found.q[2][i]], [e.reduce((sum, value) => sum + value * value, 0)], 1e-8, `Q of sample ${i}`);
        expectAgreement(found.kept!.residuals[i], e, 1e-9, `residual of sample ${i}`);
        const variance = (a: number) => fit.scores.reduce((sum, row) => sum + row[a] ** 2, 0) / (fit.scores.length - 1);
        expectAgreement(
          [found.t2[2][i]],
          [t.reduce((sum, score, a) => sum + score ** 2 / variance(a), 0)],
          1e-9,
          `T² of sample ${i}`,
        );
      });
    }
  });

  test("predicts by the mean of the others where there are no components", () => {
    const others = set.y.filter((_, i) => !segments[0].includes(i));
    expect(found.predicted[0][segments[0][0]][0]).toBeCloseTo(
      others.reduce((sum, [value]) => sum + value, 0) / others.length,
      10,
    );
  });

  test("tells its progress segment by segment", () => {
    const seen: string[] = [];
    crossValidate(set, {
      steps,
      components: 1,
      scaleY: false,
      segments,
      onProgress: (done, of) => seen.push(`${done}/${of}`),
    });
    expect(seen).toEqual(["1/4", "2/4", "3/4", "4/4"]);
  });
});

describe("the recommended number of components", () => {
  // 100 samples whose squared errors at each number of components are given: half of them e², half 0.5 e²
  const predictedWith = (sizes: number[]) =>
    sizes.map((size) =>
      Array.from({ length: 100 }, (_, i) => Float64Array.of(i + size * (i % 2 === 0 ? 1 : Math.SQRT1_2))),
    );
  const reference = Array.from({ length: 100 }, (_, i) => Float64Array.of(i));

  test("is the least one within one standard error of the least error", () => {
    const found = recommendComponents(predictedWith([9, 2, 1.01, 1, 1.2]), reference);
    expect(found).toMatchObject({ components: 2, leastAt: 3 });
    expect(found.says).toBe(
      "the smallest model within one standard error of the least cross-validated error, which 3 components have",
    );
  });

  test("is the least error itself where every smaller model is clearly worse", () => {
    const found = recommendComponents(predictedWith([9, 2, 1.3, 1, 1.2]), reference);
    expect(found).toMatchObject({ components: 3, leastAt: 3 });
    // squared errors 1 and ½: mean ¾, standard deviation ¼ · √(100/99), in units of the variance of the reference
    const variance = (100 * 101) / 12;
    expect(found.threshold * variance).toBeCloseTo(0.75 + 0.25 * Math.sqrt(1 / 99), 10);
  });

  test("is at least one, even where the mean predicts as well", () => {
    expect(recommendComponents(predictedWith([1, 2, 3]), reference).components).toBe(1);
  });
});
