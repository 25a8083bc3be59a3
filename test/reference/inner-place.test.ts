// Source: R's pls 2.8-1 on gasoline, rows 1–50 to fit and 51–60 held out (data/gasoline-pls.json, gasoline-monitoring.json). R's Y scores are
// the y that the components before have left, in units of y; ours are divided by the component's loading, so that u = t on the line.
import { describe, expect, test } from "vitest";
import { innerPlaces, yScoresOf } from "../../core/agreement/index.ts";
import { tQuantile } from "../../core/limits/index.ts";
import type { Model } from "../../core/model/index.ts";
import { expectAgreement } from "./agreement.ts";
import { gasoline, gasolineMonitoring, gasolinePls, gasolineTest } from "./gasoline.ts";

const components = 5;
const { Q, T, U } = gasolinePls.oscorespls;
const q = Q[0].slice(0, components);
const first = (rows: number[][]) => rows.map((row) => row.slice(0, components));

/** R's model, as far as the inner relation asks for it. */
const model = {
  components,
  properties: [{ name: "octane", unit: "", range: [83.4, 89.6], mean: gasolinePls.y_mean, deviation: 1 }],
  yLoadings: q.map((value) => [value]),
  scores: first(T),
  samples: { names: gasoline.spectra.names, excluded: [], reference: gasoline.y.map((row) => [row[0]]) },
} as unknown as Model;

const heldOut = first(gasolineMonitoring.ncomp_5.scores_test);
const octane = gasolineTest.y.map((row) => row[0]);

describe("t and u, component by component", () => {
  test("u of the calibration samples is R's", () => {
    const ours = gasoline.y.map((row, i) => yScoresOf(row[0], model.scores![i], model, 0));
    for (let a = 0; a < components; a++) {
      expectAgreement(
        ours.map((u) => u[a] * q[a]),
        U.map((row) => row[a]),
        1e-9,
        `u of component ${a + 1}`,
      );
    }
  });

  test("u of held-out samples is what R's predictions with the components before leave of their octane", () => {
    const ours = octane.map((y, i) => yScoresOf(y, heldOut[i], model, 0));
    for (let a = 0; a < components; a++) {
      const before = (i: number) => (a === 0 ? gasolinePls.y_mean : gasolinePls.predicted_test_by_ncomp[a - 1][i]);
      expectAgreement(
        ours.map((u) => u[a] * q[a]),
        octane.map((y, i) => y - before(i)),
        1e-9,
        `u of component ${a + 1}`,
        10,
      );
    }
  });
});

describe("where held-out samples lie", () => {
  const pairs = heldOut.map((t, index) => ({ index, t, laboratory: octane[index] }));

  test("they keep to the relation of the calibration, all of them, in the component that carries most", () => {
    const { odd, limit, pairs: placed } = innerPlaces(pairs, model, 0)[1];
    expect(odd).toEqual([]);
    expect(limit).toBeCloseTo(tQuantile(0.995, 50 - 3), 12);
    expect(placed.apart.every((apart) => Math.abs(apart) < limit)).toBe(true);
  });

  // The sample's spectrum and the other's octane number are ordinary each; together they are not.
  test("a sample with another sample's value is odd, though its scores and its value are ordinary", () => {
    const low = octane.indexOf(Math.min(...octane));
    const high = octane.indexOf(Math.max(...octane));
    const swapped = pairs.map((pair) => (pair.index === low ? { ...pair, laboratory: octane[high] } : pair));
    const last = innerPlaces(swapped, model, 0).at(-1)!;
    expect(last.odd).toContain(low);
  });

  test("values that all lie one octane number off are a shift; values that bend with t are a bend", () => {
    const off = pairs.map((pair) => ({ ...pair, laboratory: pair.laboratory + 1 }));
    expect(innerPlaces(off, model, 0).at(-1)!.shifted).toBe(true);
    const t = pairs.map((pair) => pair.t[1]);
    const size = Math.max(...t.map(Math.abs));
    const bent = pairs.map((pair) => ({ ...pair, laboratory: pair.laboratory + 6 * (pair.t[1] / size) ** 2 }));
    expect(innerPlaces(bent, model, 0)[1].bent).toBe(true);
    expect(innerPlaces(pairs, model, 0)[1].bent).toBe(false);
  });

  test("without scores or reference values of the calibration there is nothing to place them in", () => {
    expect(innerPlaces(pairs, { ...model, scores: undefined } as Model, 0)).toEqual([]);
  });
});
