import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { MillraceError } from "../../../core/errors.ts";
import { type Model, parseModel } from "../../../core/model/index.ts";
import {
  type CalibrationOptions,
  type CalibrationSet,
  calibrate,
  compileModel,
  diagnose,
  explain,
  FitError,
  interleaved,
  leaveOneOut,
  newScore,
  predictByCoefficients,
  type Score,
  scoreInto,
} from "../../../core/pls/index.ts";
import { parseSteps } from "../../../core/spectrum/index.ts";
import { expectAgreement } from "../../reference/agreement.ts";
import { runs } from "../runs.ts";
import { ordinaryTable, tableOf, wildTable } from "./any-table.ts";

function fitted(set: CalibrationSet, options: Partial<CalibrationOptions> = {}): Model {
  return calibrate(set, {
    name: "test",
    created: "2026-01-01T00:00:00Z",
    steps: parseSteps("center"),
    components: 2,
    mostComponents: 2,
    segments: leaveOneOut(set.y.length),
    validation: "loo",
    ...options,
  }).model;
}

function scoresOf(model: Model, rows: readonly Float64Array[]): Score[] {
  const compiled = compileModel(model);
  return rows.map((row) => {
    const score = newScore(compiled);
    scoreInto(row, compiled, score);
    return score;
  });
}

const steps = fc.constantFrom(
  "center",
  "center; scale",
  "snv; center",
  "savitzky-golay 5 2 1; center",
  "detrend 1; center",
  "scale; center",
);

/** Room for six components after any of the steps. */
const wide = { samples: [10, 25], channels: [10, 40] } as const;
const upToSix = fc.integer({ min: 1, max: 6 });

describe("for any table that can be calibrated", () => {
  test("both routes to a prediction agree to 1e-10, and reading changes no spectrum", () => {
    fc.assert(
      fc.property(ordinaryTable(wide), steps, upToSix, fc.boolean(), (set, text, components, scaleY) => {
        const model = fitted(set, { steps: parseSteps(text), components, scaleY });
        const compiled = compileModel(model);
        for (const row of set.spectra.rows) {
          const before = Float64Array.from(row);
          const score = newScore(compiled);
          scoreInto(row, compiled, score);
          expectAgreement(score.values, predictByCoefficients(row, compiled), 1e-10, "ŷ");
          expect(row).toEqual(before);
        }
      }),
      { numRuns: runs(80) },
    );
  });

  test("contributions add up: T² and Q to the statistic, a prediction's to what it is above the mean", () => {
    fc.assert(
      fc.property(ordinaryTable(wide), steps, upToSix, (set, text, components) => {
        const model = fitted(set, { steps: parseSteps(text), components });
        const compiled = compileModel(model);
        for (const [i, row] of set.spectra.rows.entries()) {
          const found = explain(row, compiled);
          const [score] = scoresOf(model, [row]);
          const sum = (values: readonly number[]) => values.reduce((total, value) => total + value, 0);
          const size = sum(found.t2.map(Math.abs));
          expectAgreement([sum(found.t2)], [score.t2], 1e-10, `T² of sample ${i}`, size);
          expectAgreement([sum(found.q.map(Math.abs))], [score.q], 1e-10, `Q of sample ${i}`);
          found.predictions.forEach(({ contributions }, k) => {
            expectAgreement([sum(contributions) + model.properties[k].mean], [score.values[k]], 1e-10, "ŷ");
          });
          expectAgreement(
            found.preprocessed,
            found.reconstructed.map((value, j) => value + found.residual[j]),
            1e-12,
            "x = Pt + e",
            1,
          );
        }
      }),
      { numRuns: runs(60) },
    );
  });

  test("the order of the channels changes no prediction and no statistic", () => {
    fc.assert(
      fc.property(
        ordinaryTable(),
        fc.constantFrom("center", "center; scale", "snv; center"),
        fc.integer(),
        (set, text, seed) => {
          const p = set.spectra.axis.points.length;
          const order = Array.from({ length: p }, (_, j) => j).sort((a, b) => Math.sin(seed + a) - Math.sin(seed + b));
          const shuffled = {
            ...set,
            spectra: { ...set.spectra, rows: set.spectra.rows.map((row) => Float64Array.from(order, (j) => row[j])) },
          };
          const options = { steps: parseSteps(text) };
          expectSameScores(fitted(set, options), set, fitted(shuffled, options), shuffled);
        },
      ),
      { numRuns: runs(50) },
    );
  });

  test("SNV takes a constant and a factor of each spectrum out of every figure", () => {
    fc.assert(
      fc.property(ordinaryTable(), fc.integer(), (set, seed) => {
        const disturbed = {
          ...set,
          spectra: {
            ...set.spectra,
            rows: set.spectra.rows.map((row, i) =>
              row.map((value) => 2 * Math.sin(seed + i) + (1.5 + Math.cos(seed * 3 + i)) * value),
            ),
          },
        };
        const options = { steps: parseSteps("snv; center") };
        expectSameScores(fitted(set, options), set, fitted(disturbed, options), disturbed);
      }),
      { numRuns: runs(50) },
    );
  });

  test("another unit of the spectra changes no prediction and no T²; another unit of a property only its own numbers", () => {
    fc.assert(
      fc.property(ordinaryTable(), fc.constantFrom(1e-3, 7, 1e4), (set, factor) => {
        const bigger = {
          ...set,
          spectra: { ...set.spectra, rows: set.spectra.rows.map((row) => row.map((value) => factor * value)) },
        };
        const one = scoresOf(fitted(set), set.spectra.rows);
        const other = scoresOf(fitted(bigger), bigger.spectra.rows);
        expectAgreement(
          other.map(({ values }) => values[0]),
          one.map(({ values }) => values[0]),
          1e-8,
          "ŷ",
        );
        expectAgreement(
          other.map(({ t2 }) => t2),
          one.map(({ t2 }) => t2),
          1e-7,
          "T²",
        );
        expectAgreement(
          other.map(({ q }) => q / factor ** 2),
          one.map(({ q }) => q),
          1e-7,
          "Q",
        );
        const inGrams = { ...set, y: set.y.map((row) => row.map((value) => 1000 * value)) };
        const grams = scoresOf(fitted(inGrams), set.spectra.rows);
        expectAgreement(
          grams.map(({ values }) => values[0] / 1000),
          one.map(({ values }) => values[0]),
          1e-8,
          "ŷ",
        );
        expectAgreement(
          grams.map(({ q }) => q),
          one.map(({ q }) => q),
          1e-7,
          "Q",
        );
      }),
      { numRuns: runs(50) },
    );
  });

  test("scores are orthogonal, weights of unit length, and the file holds the model whole", () => {
    fc.assert(
      fc.property(ordinaryTable(), (set) => {
        const model = fitted(set);
        const [first, second] = [0, 1].map((a) => model.scores!.map((row) => row[a]));
        const dot = (a: readonly number[], b: readonly number[]) => a.reduce((sum, value, i) => sum + value * b[i], 0);
        expect(Math.abs(dot(first, second))).toBeLessThan(1e-9 * Math.sqrt(dot(first, first) * dot(second, second)));
        for (const w of model.weights!) expect(dot(w, w)).toBeCloseTo(1, 10);
        expect(parseModel(JSON.stringify(model), "x")).toEqual(model);
      }),
      { numRuns: runs(40) },
    );
  });
});

/** Two models on two writings of the same samples say the same. */
function expectSameScores(model: Model, set: CalibrationSet, otherModel: Model, otherSet: CalibrationSet): void {
  const one = scoresOf(model, set.spectra.rows);
  const other = scoresOf(otherModel, otherSet.spectra.rows);
  const pick = (scores: Score[], of: (score: Score) => number) => scores.map(of);
  expectAgreement(
    pick(other, ({ values }) => values[0]),
    pick(one, ({ values }) => values[0]),
    1e-8,
    "ŷ",
  );
  expectAgreement(
    pick(other, ({ t2 }) => t2),
    pick(one, ({ t2 }) => t2),
    1e-7,
    "T²",
  );
  expectAgreement(
    pick(other, ({ q }) => q),
    pick(one, ({ q }) => q),
    1e-7,
    "Q",
    Math.max(...pick(one, ({ q }) => q), 1e-6),
  );
  expectAgreement(
    pick(other, ({ nearest }) => nearest),
    pick(one, ({ nearest }) => nearest),
    1e-6,
    "nearest",
    1,
  );
  expectAgreement(otherModel.properties[0].rmsecv!, model.properties[0].rmsecv!, 1e-7, "RMSECV");
}

describe("for any table at all", () => {
  test("a model without a NaN comes out, or an error that says why not", () => {
    let models = 0;
    fc.assert(
      fc.property(wildTable, steps, fc.integer({ min: 1, max: 5 }), fc.boolean(), (set, text, components, auto) => {
        let model: Model;
        try {
          const made = calibrate(set, {
            name: "wild",
            created: "2026-01-01T00:00:00Z",
            steps: parseSteps(text),
            components: auto ? "auto" : components,
            segments:
              set.y.length < 3 || components % 2 === 0 ? leaveOneOut(set.y.length) : interleaved(set.y.length, 3),
            validation: "test",
          });
          model = made.model;
          expectFinite(diagnose(made), "diagnostics");
        } catch (error) {
          if (error instanceof MillraceError) return;
          throw error;
        }
        models++;
        parseModel(JSON.stringify(model), "x"); // JSON writes NaN as null, and null is refused
        for (const { values, t2, q, leverage, nearest } of scoresOf(model, set.spectra.rows)) {
          expectFinite([...values, t2, q, leverage, nearest], "score");
        }
      }),
      { numRuns: runs(1500) },
    );
    expect(models, "tables that could be calibrated").toBeGreaterThan(100);
  });
});

function expectFinite(value: unknown, what: string): void {
  if (typeof value === "number") {
    if (!Number.isFinite(value)) expect.fail(`${what} is ${value}`);
  } else if (value instanceof Float64Array || Array.isArray(value)) {
    for (const [i, part] of value.entries()) expectFinite(part, `${what}[${i}]`);
  } else if (typeof value === "object" && value !== null) {
    for (const [key, part] of Object.entries(value)) expectFinite(part, `${what}.${key}`);
  }
}

describe("a table that holds less than is asked", () => {
  const rows = [
    [1, 2, 3, 4],
    [2, 3, 4, 6],
    [3, 5, 5, 7],
    [4, 4, 7, 9],
    [5, 6, 8, 9],
    [7, 7, 9, 12],
  ];
  const y = [[1], [2], [3], [4.5], [5], [7]];

  test("of one rank fits one component, and says so when two are asked", () => {
    const rankOne = tableOf(
      rows.map((_, i) => [1, 2, 3].map((share) => share * (y[i][0] + 1))),
      y.map(([v], i) => [v + 0.1 * Math.sin(i)]),
    );
    expect(fitted(rankOne, { components: 1 }).components).toBe(1);
    expect(() => fitted(rankOne)).toThrow(/components is 2, expected 1 to 1/);
  });

  test("with a constant channel fits, and with scale names the channel", () => {
    const withConstant = tableOf(
      rows.map((row) => [...row, 0.5]),
      y,
    );
    expect(fitted(withConstant).weights![0][4]).toBe(0);
    expect(() => fitted(withConstant, { steps: parseSteps("center; scale") })).toThrow(/the channel at 1020 nm/);
  });

  test("with a missing reference value names property and sample", () => {
    expect(() => fitted(tableOf(rows, y.with(2, [Number.NaN])))).toThrow(FitError);
    expect(() => fitted(tableOf(rows, y.with(2, [Number.NaN])))).toThrow(
      /y1 of sample s3 is missing, expected a reference value/,
    );
  });

  test("with a property that does not vary names it; with a spectrum that is no number names sample and channel", () => {
    expect(() =>
      fitted(
        tableOf(
          rows,
          y.map(() => [5]),
        ),
      ),
    ).toThrow(/y1 is 5 in every sample/);
    expect(() => fitted(tableOf(rows.with(1, [2, Number.NaN, 4, 6]), y))).toThrow(/sample s2 at 1005 nm is NaN/);
  });

  test("and steps without center are refused with the reason", () => {
    expect(() => fitted(tableOf(rows, y), { steps: parseSteps("snv") })).toThrow(
      /without center \(snv\), expected center among them/,
    );
  });

  test("more channels than samples fit: as many components as the samples leave free", () => {
    const wide = tableOf(
      rows.map((row, i) => Array.from({ length: 30 }, (_, j) => Math.sin(i * 3 + j) + row[j % 4])),
      y,
    );
    expect(fitted(wide, { components: 4 }).components).toBe(4);
    expect(() => fitted(wide, { components: 5 })).toThrow(/components is 5, expected 1 to 4/);
  });
});
