import { describe, expect, test } from "vitest";
import {
  type Calibration,
  type CalibrationSet,
  calibrate,
  diagnose,
  innerRelation,
  interleaved,
  jackKnifeError,
  seededRandom,
  vip,
} from "../../../core/pls/index.ts";
import { parseSteps } from "../../../core/spectrum/index.ts";
import { inventedSpectra, normalOf } from "../../bench/invented-spectra.ts";

function calibrated(set: CalibrationSet, components: number): Calibration {
  return calibrate(set, {
    name: "test",
    created: "2026-01-01T00:00:00Z",
    steps: parseSteps("center"),
    components,
    mostComponents: components,
    segments: interleaved(set.y.length, 10),
    validation: "folds:10:interleaved",
  });
}

function diagnosed(set: CalibrationSet, components: number) {
  return diagnose(calibrated(set, components));
}

/** A mixture of three bands; `change` may spoil one sample. */
function mixture(
  change: (i: number, amounts: number[], spectrum: Float64Array) => number | undefined = () => undefined,
  n = 60,
): CalibrationSet {
  const normal = normalOf(seededRandom(4));
  const random = seededRandom(9);
  const { spectra } = inventedSpectra(n, 80, { ingredients: 1 });
  const band = (at: number, width: number) => spectra.axis.points.map((x) => Math.exp(-0.5 * ((x - at) / width) ** 2));
  const bands = [band(1300, 60), band(1600, 80), band(1900, 50)];
  const y: Float64Array[] = [];
  const rows = spectra.rows.map((_, i) => {
    const amounts = [random(), random(), random()];
    const row = new Float64Array(80);
    const mix = () =>
      row.forEach((__, j) => {
        row[j] = bands.reduce((sum, b, k) => sum + amounts[k] * b[j], 0) + 0.002 * normal();
      });
    mix();
    const changed = change(i, amounts, row);
    y.push(Float64Array.of(changed ?? amounts[0] + 0.01 * normal()));
    return row;
  });
  return { spectra: { ...spectra, rows }, y, propertyNames: ["first"] };
}

const kinds = (set: CalibrationSet, sample: number, components = 3) =>
  diagnosed(set, components).samples[sample].suspicions.map(({ kind }) => kind);

describe("samples that a person should look at", () => {
  test("a wrong reference value of an ordinary sample is an odd relation, and nothing else is odd about it", () => {
    expect(
      kinds(
        mixture((i, [first]) => (i === 17 ? 0.5 + (first > 0.5 ? -0.2 : 0.2) : undefined)),
        17,
      ),
    ).toEqual(["odd relation"]);
  });

  test.each([
    ["an unknown band, though it widens the limit of Q by moments beyond itself,", 0.1],
    ["a faint one too", 0.015],
  ])("%s is an odd spectrum", (_, height) => {
    const withBand = mixture((i, amounts, row) => {
      if (i === 5) {
        row.forEach((__, j) => {
          row[j] += height * Math.exp(-0.5 * ((j - 70) / 2) ** 2);
        });
      }
      return amounts[0];
    });
    expect(kinds(withBand, 5)).toContain("odd spectrum");
  });

  test("three times the usual amount is extreme, and is kept", () => {
    const strong = mixture((i, amounts, row) => {
      if (i === 8)
        row.forEach((_, j) => {
          row[j] *= 4;
        });
      return i === 8 ? 4 * amounts[0] : amounts[0];
    });
    const { samples } = diagnosed(strong, 3);
    expect(samples[8].suspicions.map(({ kind }) => kind)).toContain("extreme");
    expect(samples.length).toBe(60);
  });

  test("few of the samples of a clean set are", () => {
    expect(
      diagnosed(mixture(), 3).samples.filter(({ suspicions }) => suspicions.length > 0).length,
    ).toBeLessThanOrEqual(4);
  });

  test("held out, a sample lies further off than in the fit", () => {
    const { samples } = diagnosed(mixture(), 3);
    const mean = (of: (s: (typeof samples)[number]) => number) =>
      samples.reduce((sum, sample) => sum + of(sample), 0) / samples.length;
    expect(mean(({ q }) => q.crossValidated)).toBeGreaterThan(mean(({ q }) => q.fit));
    expect(mean(({ error }) => error[0].crossValidated ** 2)).toBeGreaterThan(mean(({ error }) => error[0].fit ** 2));
  });
});

describe("the inner relation", () => {
  const normal = normalOf(seededRandom(2));
  const t = Array.from({ length: 60 }, normal);
  const straight = { t, u: t.map((value) => value + 0.2 * normal()) };
  const bent = { t, u: t.map((value) => value + 0.3 * value ** 2 + 0.2 * normal()) };
  const none = { t, u: t.map(normal) };

  test("that is straight holds and does not bend", () => {
    expect(innerRelation(1, straight, straight)).toMatchObject({ bent: false, empty: false });
  });

  test("that bends is found, and its t statistic is that of the quadratic term", () => {
    const found = innerRelation(1, bent, bent);
    expect(found.bent).toBe(true);
    expect(found.curvature).toBeGreaterThan(8);
    expect(innerRelation(1, { t, u: bent.u.map((u) => -u) }, bent).curvature).toBeCloseTo(-found.curvature, 8);
  });

  test("that exists in the fit only is empty: the component is not worth taking", () => {
    expect(innerRelation(1, straight, none)).toMatchObject({ empty: true });
  });

  test("flags a straight relation as bent in about 1 % and an absent one as real in about 1 % of 2 000 draws", () => {
    let bends = 0;
    let real = 0;
    for (let k = 0; k < 2000; k++) {
      const x = Array.from({ length: 25 }, normal);
      const found = innerRelation(1, { t: x, u: x.map((value) => value + normal()) }, { t: x, u: x.map(normal) });
      if (found.bent) bends++;
      if (!found.empty) real++;
    }
    // 20 of 2 000 nominal, three standard errors of ± 13
    for (const count of [bends, real]) {
      expect(count).toBeGreaterThan(7);
      expect(count).toBeLessThan(33);
    }
  });

  test("tells of a property that is not linear, and of a component too many", () => {
    const curved = mixture((_, [first]) => 3 * first ** 2);
    const relations = diagnosed(curved, 3).innerRelations;
    expect(relations.some(({ bent: bends }) => bends)).toBe(true);
    const tooMany = diagnosed(mixture(), 6).innerRelations;
    expect(tooMany[0].empty).toBe(false);
    expect(tooMany.slice(3).some(({ empty }) => empty)).toBe(true);
  });
});

describe("figures of the channels", () => {
  test("the mean of VIP² is 1, whatever the model", () => {
    for (const components of [1, 3, 5]) {
      const { vip: found } = diagnosed(mixture(), components);
      expect(found.reduce((sum, value) => sum + value ** 2, 0) / found.length).toBeCloseTo(1, 10);
    }
  });

  test("VIP by hand: two components that explain 3 and 1 of y", () => {
    // s₁ = 3, s₂ = 1; w₁ = (1, 0), w₂ = (0, 1): VIP² = 2 · (3, 1)/4
    const found = vip(
      [
        [1, 0],
        [0, 1],
      ],
      [[Math.sqrt(3)], [1]],
      [
        [1, 0],
        [0, 1],
      ],
    );
    expect(found[0]).toBeCloseTo(Math.sqrt(1.5), 12);
    expect(found[1]).toBeCloseTo(Math.sqrt(0.5), 12);
  });

  test("the jack-knife by hand: three segments", () => {
    // (g − 1)/g Σ (b₋ᵢ − b)² = ⅔ (0.01 + 0 + 0.04)
    expect(jackKnifeError([1], [[1.1], [1], [0.8]])[0]).toBeCloseTo(Math.sqrt((2 / 3) * 0.05), 12);
  });

  test("explained variance rises to nearly all of a clean mixture with as many components as ingredients", () => {
    const { explained } = diagnosed(mixture(), 3);
    expect(explained.x[2]).toBeGreaterThan(0.99);
    expect(explained.y[0].fit[2]).toBeGreaterThan(0.99);
    expect(explained.x).toEqual([...explained.x].sort((a, b) => a - b));
  });
});
