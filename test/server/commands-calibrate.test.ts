import { existsSync, readdirSync, readFileSync } from "node:fs";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { MillraceError } from "../../core/errors.ts";
import { modelId, parseModel } from "../../core/model/index.ts";
import { calibrateCommand } from "../../server/commands/calibrate.ts";
import { inspectCommand } from "../../server/commands/inspect.ts";
import { expectEachClose } from "../reference/agreement.ts";
import { gasolineMonitoring, gasolinePls } from "../reference/gasoline.ts";
import { gasolineFiles } from "./gasoline-files.ts";
import { isUsageError, runCommand } from "./run-command.ts";

const files = gasolineFiles();
afterAll(files.remove);
const out = files.path("octane.model.json");
const calibrateWith = (...words: string[]) =>
  runCommand(calibrateCommand(), ["--data", files.calibration, "--property", "octane", "--out", out, ...words]);
const inspectJson = async () => JSON.parse((await runCommand(inspectCommand(), [out, "--json"])).out);

describe("calibrate on gasoline", () => {
  beforeAll(async () => {
    const { error } = await calibrateWith("--components", "3", "--unit", "octane=RON", "--test", files.test);
    expect(error).toBeUndefined();
  });

  // Source: R 4.2.2, pls 2.8-1: see test/reference/README.md.
  test("writes a model whose errors and limits, as inspect tells them, are R's", async () => {
    const found = await inspectJson();
    const listed = gasolineMonitoring["ncomp_3"].limits["alpha_0.01"];
    expect(found).toMatchObject({
      components: 3,
      axis: { unit: "nm", start: 900, step: 2, count: 401 },
      properties: [{ name: "octane", unit: "RON", range: [83.4, 88.9] }],
      steps: "center",
      validation: "loo",
      samples: 50,
      excluded: [],
    });
    expectEachClose(found.rmsecv.slice(0, 9), gasolinePls.rmsep.loo_cv, 1e-9, "RMSECV");
    expectEachClose(
      [found.rmsec, found.properties[0].rmsep],
      [gasolinePls.rmsep.train[3], gasolinePls.rmsep.test[3]],
      1e-9,
      "RMSEC, RMSEP",
    );
    const { t2, q } = found.limits.all;
    expectEachClose(
      [found.limits.t2, t2.f, t2.beta],
      [listed.T2_limit_F, listed.T2_limit_F, listed.T2_limit_beta],
      1e-9,
      "T²",
    );
    expectEachClose(
      [q.fit.jacksonMudholkar, q.fit.box, q.fit.boxMoments, q.fit.empirical],
      [
        listed.Q_limit_jackson_mudholkar,
        listed.Q_limit_box_theta,
        listed.Q_limit_box_moments,
        listed.Q_limit_empirical,
      ],
      1e-9,
      "Q",
    );
    expect(found.limits.q).toBe(q.crossValidated.boxMoments);
    expect(found.limits.q).toBeGreaterThan(q.fit.boxMoments);
  });

  test("says in words what it took, and what the one-standard-error rule recommends", async () => {
    const { out: words } = await calibrateWith("--components", "4");
    expect(words).toMatch(/^3 {2}\(recommended\) +0\.2524$/m);
    expect(words).toMatch(/^4 {2}<- in the model +0\.2476$/m);
    expect(words).toMatch(
      /rule: 3, the smallest model within one standard error .* which 8 components have; 4 taken as asked\./,
    );
  });

  test("takes the recommended number for auto, and says so in JSON too", async () => {
    const { out: text } = await calibrateWith("--components", "auto", "--json");
    const found = JSON.parse(text);
    expect(found).toMatchObject({ components: 3, recommended: 3, samples: 50, model: out });
    expect(found.id).toBe(modelId(parseModel(readFileSync(out, "utf8"), out)));
  });

  test("keeps who was excluded and why, and warns when it is more than a tenth", async () => {
    const { error } = await calibrateWith(
      "--components",
      "2",
      "--exclude",
      "1",
      "2",
      "3",
      "4",
      "5",
      "6",
      "--exclude-reason",
      "cell leaked",
    );
    expect(error).toBeUndefined();
    const found = await inspectJson();
    expect(found.samples).toBe(44);
    expect(found.excluded).toContainEqual({ name: "6", reason: "cell leaked" });
    expect(found.warnings.join()).toMatch(
      /6 of 50 samples \(12 %\) were excluded: expect the model to fail on the like share of new samples/,
    );
    const { out: words } = await runCommand(inspectCommand(), [out]);
    expect(words).toMatch(/excluded: 1 \(cell leaked\), 2/);
    expect(words).toMatch(/Mind: 6 of 50/);
  });

  test("validates by group, by folds and by seeded random folds", async () => {
    const grouped = files.table("grouped.csv", []);
    const { writeFileSync } = await import("node:fs");
    const lines = [files.header, ...files.rows.slice(0, 50)].map(
      (line, i) => `${i === 0 ? "group" : `batch ${i % 7}`},${line}`,
    );
    writeFileSync(grouped, `${lines.join("\n")}\n`);
    const by = async (how: string) => {
      const { error } = await runCommand(calibrateCommand(), [
        "--data",
        grouped,
        "--property",
        "octane",
        "--out",
        out,
        "--components",
        "3",
        "--validate",
        how,
      ]);
      expect(error).toBeUndefined();
      const { crossValidation, properties } = parseModel(readFileSync(out, "utf8"), out);
      return [crossValidation!.method, crossValidation!.segments, properties[0].rmsecv![3]] as const;
    };
    expect((await by("group")).slice(0, 2)).toEqual(["group", 7]);
    expect((await by("folds:5")).slice(0, 2)).toEqual(["folds:5:interleaved", 5]);
    expect(await by("folds:5:random:4")).toEqual(await by("folds:5:random:4"));
    expect(await by("folds:5:random:4")).not.toEqual(await by("folds:5:random:5"));
  });
});

describe("calibrate says what is wrong", () => {
  test.each([
    [
      "a property that is not there",
      ["--property", "octan"],
      /the property "octan" is not in .*calibration\.csv, expected one of: octane/,
    ],
    ["a sample that is not there", ["--exclude", "99"], /the excluded sample "99" is not in/],
    ["too many components", ["--components", "49"], /components is 49, expected 1 to 46/],
    ["steps without center", ["--steps", "snv"], /without center/],
    ["a table without groups", ["--validate", "group"], /without a column "group"/],
    ["a table that is not there", ["--data", "nowhere.csv"], /nowhere\.csv cannot be read: there is no such file/],
    [
      "a folder that is not there",
      ["--out", "/nowhere/at/all.model.json"],
      /cannot be written: there is no such file or folder/,
    ],
  ])("%s", async (_, words, says) => {
    const { error, out: printed } = await calibrateWith(...words);
    expect(error).toBeInstanceOf(MillraceError);
    expect((error as Error).message).toMatch(says);
    expect(printed).toBe("");
  });

  test("a missing reference value, by property and sample", async () => {
    const cells = files.rows[4].split(",");
    const gap = files.table("gap.csv", [
      ...files.rows.slice(0, 4),
      cells.with(1, "").join(","),
      ...files.rows.slice(5, 20),
    ]);
    const { error } = await calibrateWith("--data", gap);
    expect((error as Error).message).toMatch(
      /octane of sample 5 is missing, expected a reference value\. Fill it in, or exclude the sample/,
    );
    expect((await calibrateWith("--data", gap, "--exclude", "5")).error).toBeUndefined();
  });

  test("an option that cannot be read is bad usage", async () => {
    for (const words of [
      ["--steps", "magic"],
      ["--components", "0"],
      ["--validate", "folds"],
      ["--confidence", "99"],
      ["--axis-unit", "m"],
      ["--unit", "RON"],
      ["--nonsense"],
    ]) {
      expect(isUsageError((await calibrateWith(...words)).error), words.join(" ")).toBe(true);
    }
    expect(isUsageError((await runCommand(calibrateCommand(), [])).error)).toBe(true);
  });

  test("and leaves no half-written file behind", async () => {
    const bad = files.path("bad.model.json");
    await calibrateWith("--out", bad, "--components", "49");
    expect(existsSync(bad)).toBe(false);
    expect(readdirSync(files.path(".")).filter((name) => name.endsWith(".part"))).toEqual([]);
  });
});
