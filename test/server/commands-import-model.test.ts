import { readFileSync, writeFileSync } from "node:fs";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { MillraceError } from "../../core/errors.ts";
import { parseModel } from "../../core/model/index.ts";
import { importModelCommand } from "../../server/commands/import-model.ts";
import { scoreCommand } from "../../server/commands/score.ts";
import { expectEachClose } from "../reference/agreement.ts";
import { gasoline, gasolineMonitoring, gasolinePls } from "../reference/gasoline.ts";
import { gasolineFiles } from "./gasoline-files.ts";
import { runCommand } from "./run-command.ts";

// The matrices are R's (oscorespls on rows 1–50 of gasoline, 8 components): a model that was fitted elsewhere.
const { oscorespls, x_mean, y_mean } = gasolinePls;
const files = gasolineFiles();
afterAll(files.remove);
const out = files.path("imported.model.json");

function matrixFile(name: string, rows: readonly (readonly number[])[]): string {
  const file = files.path(name);
  writeFileSync(file, `${rows.map((row) => row.join(",")).join("\n")}\n`);
  return file;
}

const paths: Record<string, string> = {};
beforeAll(() => {
  const axis = Array.from(gasoline.spectra.axis.points);
  const components = 3;
  const first = (rows: number[][]) => rows.map((row) => row.slice(0, components));
  const residuals = gasoline.spectra.rows.map((row, i) =>
    Array.from(
      row,
      (value, j) => value - x_mean[j] - first(oscorespls.T)[i].reduce((sum, t, a) => sum + t * oscorespls.P[j][a], 0),
    ),
  );
  Object.assign(paths, {
    axis: matrixFile("axis.csv", [axis]),
    mean: matrixFile(
      "mean.csv",
      x_mean.map((value) => [value]),
    ),
    W: matrixFile("W.csv", oscorespls.W),
    // on its side: 8 × 401
    P: matrixFile(
      "P.csv",
      oscorespls.P[0].map((_, a) => oscorespls.P.map((row) => row[a])),
    ),
    Q: matrixFile("Q.csv", oscorespls.Q),
    T: matrixFile("T.csv", oscorespls.T),
    E: matrixFile("E.csv", residuals),
    B: matrixFile(
      "B.csv",
      oscorespls.coef_by_ncomp[2].map((value) => [value]),
    ),
    yMean: matrixFile("y-mean.csv", [[y_mean]]),
    sec: matrixFile("sec.csv", [[gasolineMonitoring["ncomp_3"].prediction_uncertainty.SEC]]),
  });
});

const common = () => [
  "--axis",
  paths.axis,
  "--mean",
  paths.mean,
  "--property",
  "octane",
  "--range",
  "octane=83.4:88.9",
  "--out",
  out,
];
const matrices = () => [
  "--weights",
  paths.W,
  "--loadings",
  paths.P,
  "--y-loadings",
  paths.Q,
  "--y-mean",
  paths.yMean,
  "--components",
  "3",
];
const importWith = (...words: string[]) => runCommand(importModelCommand(), [...common(), ...words]);
const scored = async (...words: string[]) => {
  const { out: text, err } = await runCommand(scoreCommand(), [
    "--model",
    out,
    "--data",
    files.test,
    "--format",
    "json",
    ...words,
  ]);
  return { rows: JSON.parse(text), err };
};

describe("import-model", () => {
  test("of weights, loadings, scores and residuals judges as R does", async () => {
    const { error, out: words } = await importWith(
      ...matrices(),
      "--scores",
      paths.T,
      "--residuals",
      paths.E,
      "--sec",
      paths.sec,
    );
    expect(error).toBeUndefined();
    expect(words).toMatch(/3 components, 900–1700 nm, 401 points/);
    expect(words).toMatch(/Mind: Without cross-validated residuals only limits from the fit remain/);
    const { rows } = await scored("--q-residuals", "fit", "--q-limit", "jackson-mudholkar");
    const expected = gasolineMonitoring["ncomp_3"];
    expectEachClose(
      rows.map((row: { properties: { octane: { value: number } } }) => row.properties.octane.value),
      gasolinePls.predicted_test_by_ncomp[2],
      1e-9,
      "ŷ",
    );
    expectEachClose(
      rows.map(({ t2 }: { t2: number }) => t2),
      expected.T2_test,
      1e-8,
      "T²",
    );
    expectEachClose(
      rows.map(({ q }: { q: number }) => q),
      expected.Q_test,
      1e-8,
      "Q",
    );
    const limits = expected.limits["alpha_0.01"];
    expectEachClose(
      [rows[0].limits.t2, rows[0].limits.q],
      [limits.T2_limit_F, limits.Q_limit_jackson_mudholkar],
      1e-7,
      "limits",
    );
  });

  test("of coefficients alone predicts, and claims nothing that it cannot judge", async () => {
    const { error, out: words } = await importWith("--coefficients", paths.B, "--intercept", paths.yMean);
    expect(error).toBeUndefined();
    expect(words).toMatch(/Mind: Without calibration scores T², leverage and the nearest sample cannot be judged/);
    expect(words).toMatch(/Mind: Without loadings Q cannot be computed/);
    const { rows, err } = await scored();
    expectEachClose(
      rows.map((row: { properties: { octane: { value: number } } }) => row.properties.octane.value),
      gasolinePls.predicted_test_by_ncomp[2],
      1e-9,
      "ŷ",
    );
    expect(rows[0]).toMatchObject({
      t2: null,
      q: null,
      nearest: null,
      limits: { t2: null, q: null, nearest: null },
      verdict: [],
    });
    expect(err).toMatch(/without calibration scores/);
  });

  test("without scores computes Q, and says that T² cannot be judged", async () => {
    const { out: words } = await importWith(...matrices());
    expect(words).toMatch(/T², leverage and the nearest sample cannot be judged/);
    expect(words).toMatch(/Without residuals Q has no limit of its own/);
    const { rows } = await scored();
    expect(rows[0].q).toBeGreaterThan(0);
    expect(rows[0]).toMatchObject({ t2: null, verdict: [] });
    expect(parseModel(readFileSync(out, "utf8"), out).origin).toBe("imported");
  });

  test.each([
    ["a part missing", () => ["--weights", paths.W], /--loadings, --y-loadings, --y-mean is missing, expected all of/],
    ["nothing to predict with", () => [], /is missing, expected all of --weights.* or --coefficients and --intercept/],
    [
      "both kinds",
      () => ["--coefficients", paths.B, "--intercept", paths.yMean, "--scores", paths.T],
      /--scores is given beside --coefficients/,
    ],
    [
      "a matrix of another shape",
      () => [...matrices(), "--scores", paths.B],
      /B\.csv is 401 × 1 numbers, expected any × 8 \(samples × components\)/,
    ],
    [
      "scores that are not centred",
      () => [
        ...matrices(),
        "--scores",
        matrixFile(
          "T1.csv",
          oscorespls.T.map((row) => row.map((t) => t + 1)),
        ),
      ],
      /T1\.csv: the mean of column 1 is .*, expected 0/,
    ],
    [
      "a header in a matrix",
      () => ["--coefficients", files.calibration, "--intercept", paths.yMean],
      /line 1 is "sample", expected numbers separated by commas, without a header/,
    ],
    ["too many components", () => [...matrices().slice(0, -1), "9"], /--components is 9, expected at most 8/],
    [
      "no mean for center",
      () => ["--coefficients", paths.B, "--intercept", paths.yMean, "--steps", "center; scale"],
      /--deviation is missing, expected a file, which the step scale needs/,
    ],
  ])("refuses %s", async (_, words, says) => {
    const { error } = await importWith(...words());
    expect(error).toBeInstanceOf(MillraceError);
    expect((error as Error).message).toMatch(says);
  });
});
