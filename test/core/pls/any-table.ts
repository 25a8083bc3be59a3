import fc from "fast-check";
import { type CalibrationSet, seededRandom } from "../../../core/pls/index.ts";
import { axisFromSpec } from "../../../core/spectrum/index.ts";
import { normalOf } from "../../bench/invented-spectra.ts";

interface Shape {
  samples?: readonly [number, number];
  channels?: readonly [number, number];
  properties?: readonly [number, number];
}

/** A table of ordinary numbers: normal amounts of four ingredients, noise in spectra and laboratory. From a seed, so that none is degenerate. */
export function ordinaryTable({
  samples = [8, 25],
  channels = [5, 40],
  properties = [1, 3],
}: Shape = {}): fc.Arbitrary<CalibrationSet> {
  return fc
    .record({
      seed: fc.integer(),
      n: fc.integer({ min: samples[0], max: samples[1] }),
      p: fc.integer({ min: channels[0], max: channels[1] }),
      m: fc.integer({ min: properties[0], max: properties[1] }),
    })
    .map(({ seed, n, p, m }) => {
      const normal = normalOf(seededRandom(seed));
      const matrix = (rows: number, columns: number) =>
        Array.from({ length: rows }, () => Array.from({ length: columns }, normal));
      const [amounts, bands, effects] = [matrix(n, 4), matrix(4, p), matrix(4, m)];
      const times = (row: number[], by: number[][], j: number) =>
        row.reduce((sum, amount, k) => sum + amount * by[k][j], 0);
      return tableOf(
        amounts.map((row) => Array.from({ length: p }, (_, j) => 3 + times(row, bands, j) + 0.05 * normal())),
        amounts.map((row) => Array.from({ length: m }, (_, k) => 50 + 10 * times(row, effects, k) + 0.1 * normal())),
      );
    });
}

/** Any numbers at all, in any shape: constant columns, repeated samples, huge and tiny values, gaps. */
export const wildTable: fc.Arbitrary<CalibrationSet> = fc
  .record({ n: fc.integer({ min: 1, max: 12 }), p: fc.integer({ min: 2, max: 12 }), m: fc.integer({ min: 1, max: 2 }) })
  .chain(({ n, p, m }) => {
    const value = fc.oneof(
      { weight: 300, arbitrary: fc.double({ min: -10, max: 10, noNaN: true }) },
      { weight: 60, arbitrary: fc.constantFrom(0, 1, 1, 2, -1) },
      { weight: 1, arbitrary: fc.constantFrom(1e-300, 1e300, -1e150, Number.NaN, Number.POSITIVE_INFINITY, 1e-20) },
    );
    const matrix = (columns: number) =>
      fc.array(fc.array(value, { minLength: columns, maxLength: columns }), { minLength: n, maxLength: n });
    return fc.tuple(matrix(p), matrix(m));
  })
  .map(([x, y]) => tableOf(x, y));

export function tableOf(x: number[][], y: number[][]): CalibrationSet {
  return {
    spectra: {
      axis: axisFromSpec({ unit: "nm", start: 1000, step: 5, count: x[0].length }),
      rows: x.map((row) => Float64Array.from(row)),
      names: x.map((_, i) => `s${i + 1}`),
    },
    y: y.map((row) => Float64Array.from(row)),
    propertyNames: y[0].map((_, k) => `y${k + 1}`),
  };
}
