import { readFileSync, writeFileSync } from "node:fs";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { ModelFileError } from "../../core/model/index.ts";
import { calibrateCommand } from "../../server/commands/calibrate.ts";
import { scoreCommand } from "../../server/commands/score.ts";
import { expectEachClose } from "../reference/agreement.ts";
import { gasolineMonitoring, gasolinePls } from "../reference/gasoline.ts";
import { gasolineFiles } from "./gasoline-files.ts";
import { isUsageError, runCommand } from "./run-command.ts";

const files = gasolineFiles();
afterAll(files.remove);
const model = files.path("octane.model.json");
const score = (...words: string[]) => runCommand(scoreCommand(), ["--model", model, "--data", files.test, ...words]);

interface Scored {
  sample: string;
  properties: Record<string, { value: number | null; uncertainty: number | null }>;
  t2: number;
  q: number;
  leverage: number;
  nearest: number;
  limits: { t2: number; q: number; nearest: number };
  verdict: string[];
}
const scoredJson = async (...words: string[]): Promise<Scored[]> =>
  JSON.parse((await score("--format", "json", ...words)).out);

beforeAll(async () => {
  const words = ["--data", files.calibration, "--property", "octane", "--components", "3", "--out", model];
  expect((await runCommand(calibrateCommand(), words)).error).toBeUndefined();
});

describe("score on gasoline", () => {
  // Source: R 4.2.2, pls 2.8-1: see test/reference/README.md.
  test("rows 51–60 have R's predictions, T², Q, leverage and distances", async () => {
    const found = await scoredJson();
    const expected = gasolineMonitoring["ncomp_3"];
    expect(found.map(({ sample }) => sample)).toEqual(["51", "52", "53", "54", "55", "56", "57", "58", "59", "60"]);
    expectEachClose(
      found.map(({ properties }) => properties["octane"].value!),
      gasolinePls.predicted_test_by_ncomp[2],
      1e-9,
      "ŷ",
    );
    expectEachClose(
      found.map(({ t2 }) => t2),
      expected.T2_test,
      1e-9,
      "T²",
    );
    expectEachClose(
      found.map(({ q }) => q),
      expected.Q_test,
      1e-9,
      "Q",
    );
    expectEachClose(
      found.map(({ leverage }) => leverage),
      expected.leverage_with_mean_test,
      1e-9,
      "leverage",
    );
    expectEachClose(
      found.map(({ nearest }) => nearest),
      expected.nearest_neighbour.nn_mahalanobis_test,
      1e-9,
      "nearest",
    );
  });

  test.each([
    ["f", "jackson-mudholkar", "0.99", "T2_limit_F", "Q_limit_jackson_mudholkar"],
    ["beta", "box", "0.95", "T2_limit_beta", "Q_limit_box_theta"],
    ["chi-squared", "box-moments", "0.99", "T2_limit_chi2", "Q_limit_box_moments"],
    ["f", "empirical", "0.95", "T2_limit_F", "Q_limit_empirical"],
  ] as const)("limits by %s and %s at %s are R's", async (t2, q, confidence, t2Key, qKey) => {
    const [{ limits }] = await scoredJson(
      "--t2-limit",
      t2,
      "--q-limit",
      q,
      "--q-residuals",
      "fit",
      "--confidence",
      confidence,
    );
    const listed = gasolineMonitoring["ncomp_3"].limits[`alpha_${confidence === "0.99" ? 0.01 : 0.05}`];
    expectEachClose([limits.t2, limits.q], [listed[t2Key], listed[qKey]], 1e-9, "limit");
  });

  test("a reading beyond a limit carries the verdict and no uncertainty; one inside carries both", async () => {
    const found = await scoredJson();
    for (const { q, t2, nearest, limits, verdict, properties } of found) {
      expect(verdict.includes("unfamiliar")).toBe(q > limits.q);
      expect(verdict.includes("extrapolated")).toBe(t2 > limits.t2);
      if (nearest <= limits.nearest) expect(verdict).not.toContain("sparse");
      expect(properties["octane"].uncertainty === null).toBe(verdict[0] !== "inside");
    }
    expect(found.some(({ verdict }) => verdict[0] === "unfamiliar")).toBe(true);
    const calibration: Scored[] = JSON.parse(
      (await runCommand(scoreCommand(), ["--model", model, "--data", files.calibration, "--format", "json"])).out,
    );
    expect(calibration.filter(({ verdict }) => verdict[0] === "inside").length).toBeGreaterThan(45);
    // t(0.975; 46) = 2.012896 (printed tables)
    const { SEC } = gasolineMonitoring["ncomp_3"].prediction_uncertainty;
    expect(calibration[0].properties["octane"].uncertainty).toBeCloseTo(
      2.012896 * SEC * Math.sqrt(1 + calibration[0].leverage),
      6,
    );
  });

  test("CSV, JSON and NDJSON say the same", async () => {
    const json = await scoredJson();
    const lines = (await score("--format", "ndjson")).out
      .trim()
      .split("\n")
      .map((line) => JSON.parse(line));
    expect(lines).toEqual(json);
    const [header, ...rows] = (await score()).out
      .trim()
      .split("\n")
      .map((line) => line.split(","));
    expect(header).toEqual([
      "sample",
      "octane",
      "octane uncertainty",
      "t2",
      "q",
      "leverage",
      "nearest",
      "t2 limit",
      "q limit",
      "nearest limit",
      "verdict",
    ]);
    expect(rows.map((row) => [row[0], Number(row[1]), Number(row[3]), row[10]])).toEqual(
      json.map(({ sample, properties, t2, verdict }) => [sample, properties["octane"].value, t2, verdict.join(" ")]),
    );
  });

  test("a table on another axis is brought to the model's, and that is said", async () => {
    // the same spectra from 1700 down to 900 nm
    const turned = [files.header, ...files.rows.slice(50)].map((line) => {
      const [sample, octane, ...values] = line.split(",");
      return [sample, octane, ...values.reverse()].join(",");
    });
    const table = files.path("turned.csv");
    writeFileSync(table, `${turned.join("\n")}\n`);
    const { out, err } = await runCommand(scoreCommand(), ["--model", model, "--data", table, "--format", "json"]);
    expect(err).toMatch(
      /The table's axis \(1700–900 nm, 401 points\) is brought to the model's \(900–1700 nm, 401 points\)/,
    );
    expect(JSON.parse(out)).toEqual(await scoredJson());
  });

  test("a table that does not cover the axis is refused, and the range named", async () => {
    const short = [files.header, ...files.rows.slice(50)].map((line) => line.split(",").slice(0, -20).join(","));
    const table = files.path("short.csv");
    writeFileSync(table, `${short.join("\n")}\n`);
    const { error } = await runCommand(scoreCommand(), ["--model", model, "--data", table]);
    expect((error as Error).message).toMatch(/20 points between 1662 and 1700 nm are not covered/);
  });

  test("a damaged model, a broken line and an empty table are refused", async () => {
    const damaged = files.path("damaged.model.json");
    writeFileSync(damaged, readFileSync(model, "utf8").replace('"components":3', '"components":4'));
    expect((await runCommand(scoreCommand(), ["--model", damaged, "--data", files.test])).error).toBeInstanceOf(
      ModelFileError,
    );
    const broken = files.table("broken.csv", [files.rows[50], `${files.rows[51]},9`]);
    expect(((await runCommand(scoreCommand(), ["--model", model, "--data", broken])).error as Error).message).toMatch(
      /broken\.csv, line 3 is 404 fields, expected 403/,
    );
    const empty = files.path("empty.csv");
    writeFileSync(empty, "");
    expect(((await runCommand(scoreCommand(), ["--model", model, "--data", empty])).error as Error).message).toMatch(
      /line 1: the header is without channels/,
    );
    expect(
      ((await runCommand(scoreCommand(), ["--model", model, "--data", files.path("none.csv")])).error as Error).message,
    ).toMatch(/none\.csv cannot be read/);
    expect(isUsageError((await score("--format", "xml")).error)).toBe(true);
  });

  test("a flat spectrum under SNV is unusable: no number is given", async () => {
    const snv = files.path("snv.model.json");
    await runCommand(calibrateCommand(), [
      "--data",
      files.calibration,
      "--property",
      "octane",
      "--components",
      "2",
      "--steps",
      "snv; center",
      "--out",
      snv,
    ]);
    const flat = files.table("flat.csv", [
      files.rows[50]
        .split(",")
        .map((cell, k) => (k < 2 ? cell : "0.5"))
        .join(","),
    ]);
    const { out } = await runCommand(scoreCommand(), ["--model", snv, "--data", flat, "--format", "json"]);
    expect(JSON.parse(out)[0]).toMatchObject({
      verdict: ["unusable"],
      t2: null,
      q: null,
      properties: { octane: { value: null, uncertainty: null } },
    });
  });
});
