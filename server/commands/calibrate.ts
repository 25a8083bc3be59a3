import { basename } from "node:path";
import { Command, Option } from "commander";
import { statisticLimits } from "../../core/limits/index.ts";
import { type Model, modelId } from "../../core/model/index.ts";
import { type Calibration, calibrate, diagnose, errorStatistics } from "../../core/pls/index.ts";
import { type Axis, describeAxis, type Step, writeSteps } from "../../core/spectrum/index.ts";
import { calibrationReport } from "../report/calibration-report.ts";
import type { TestSet } from "../report/prediction-picture.ts";
import { calibrationSetOf, withoutExcluded } from "./calibration-set.ts";
import { columns, figure } from "./figures.ts";
import { readTable, writeWhole } from "./files.ts";
import { warningsOf } from "./inspect.ts";
import {
  choiceOf,
  componentsOption,
  confidenceOption,
  countOption,
  stepsOption,
  unitOption,
  type Validation,
  validationOption,
} from "./option-values.ts";
import { predictTable } from "./predict-table.ts";

interface Options {
  data: string;
  property: string[];
  unit?: Record<string, string>;
  steps: Step[];
  components: number | "auto";
  mostComponents: number;
  validate: Validation;
  exclude: string[];
  excludeReason?: string;
  axisUnit: Axis["unit"];
  scaleY?: "yes" | "no";
  confidence: number;
  test?: string;
  name?: string;
  notes?: string;
  out: string;
  report?: string;
  json?: boolean;
}

export function calibrateCommand(): Command {
  return new Command("calibrate")
    .description(
      "fit and cross-validate a PLS model on a table of spectra with reference values, and write its model file",
    )
    .requiredOption(
      "--data <file>",
      "calibration table (CSV): [sample] [time] [group], properties, channels headed by numbers",
    )
    .requiredOption("--property <name...>", "columns to calibrate; several make one model")
    .option("--unit <name=unit>", "unit of a property; repeat for several", unitOption)
    .addOption(
      new Option(
        "--steps <steps>",
        "preprocessing, in order: absorbance; savitzky-golay WINDOW ORDER DERIVATIVE; snv; msc; detrend [ORDER]; offset [FROM-TO]; normalise area|length; select FROM-TO …; center; scale",
      )
        .argParser(stepsOption)
        .default(stepsOption("center"), "center"),
    )
    .option(
      "--components <n|auto>",
      "number of components; auto takes the one-standard-error rule's advice",
      componentsOption,
      "auto",
    )
    .option("--most-components <n>", "how many components to cross-validate", countOption, 15)
    .addOption(
      new Option("--validate <how>", "loo, group, or folds:N[:interleaved|contiguous|random[:SEED]]")
        .argParser(validationOption)
        .default(validationOption("loo"), "loo"),
    )
    .addOption(new Option("--exclude <id...>", "samples to leave out; recorded in the model").default([], "none"))
    .option("--exclude-reason <text>", "why they are left out; recorded in the model")
    .addOption(new Option("--axis-unit <unit>", "unit of the channels").choices(["nm", "cm-1"]).default("nm"))
    .addOption(
      new Option(
        "--scale-y <yes|no>",
        "divide each property by its standard deviation (default: when there are several)",
      ).choices(["yes", "no"]),
    )
    .option("--confidence <share>", "of the limits in the report", confidenceOption, 0.99)
    .option("--test <file>", "table of samples that were not used to calibrate: gives RMSEP")
    .option("--name <name>", "name of the model (default: from the file's name)")
    .option("--notes <text>", "notes to keep in the model")
    .requiredOption("--out <file>", "model file to write (*.model.json)")
    .option("--report <file>", "write a report of the calibration as one HTML page")
    .option("--json", "print what was found as JSON")
    .action(runCalibrate);
}

async function runCalibrate(options: Options): Promise<void> {
  const whole = await readTable(options.data, options.axisUnit);
  const table = withoutExcluded(whole, options.exclude);
  const set = calibrationSetOf(table, options.property);
  const calibration = calibrate(set, {
    name: options.name ?? basename(options.out).replace(/(\.model)?\.json$/, ""),
    created: new Date().toISOString(),
    notes: options.notes,
    units: options.unit,
    steps: options.steps,
    components: options.components,
    mostComponents: options.mostComponents,
    scaleY: options.scaleY === undefined ? undefined : options.scaleY === "yes",
    segments: options.validate.segmentsOf(table),
    validation: options.validate.text,
    excluded: options.exclude.map((name) => ({
      name,
      ...(options.excludeReason && { reason: options.excludeReason }),
    })),
    onProgress: progressOnTerminal(),
  });
  const test = options.test ? await testSetOf(calibration.model, options.test, options.axisUnit) : undefined;
  const model = test ? withTest(calibration.model, test) : calibration.model;
  await writeWhole(options.out, `${JSON.stringify(model)}\n`);
  if (options.report) await writeWhole(options.report, reportOf(model, calibration, test, options.confidence));
  process.stdout.write(
    options.json ? `${JSON.stringify(inJson(model, calibration, options))}\n` : inWords(model, calibration, options),
  );
}

/** A line on the terminal, written over, when the work takes longer than a second; nothing in a pipe. */
function progressOnTerminal(): (done: number, of: number) => void {
  const began = performance.now();
  let shown = 0;
  return (done, of) => {
    if (!process.stderr.isTTY) return;
    const now = performance.now();
    if (now - began > 1000 && (now - shown > 200 || done === of)) {
      shown = now;
      process.stderr.write(`\rcross-validating: ${done} of ${of}${done === of ? "\n" : ""}`);
    }
  };
}

async function testSetOf(model: Model, file: string, unit: Axis["unit"]): Promise<TestSet> {
  const names = model.properties.map(({ name }) => name);
  const { spectra, y } = calibrationSetOf(await readTable(file, unit), names);
  return { file, names: spectra.names, y, predicted: predictTable(model, spectra) };
}

function withTest(model: Model, { y, predicted }: TestSet): Model {
  const properties = model.properties.map((property, k) => {
    const known = y.map((_, i) => i).filter((i) => Number.isFinite(y[i][k]));
    if (known.length === 0) return property;
    const { rms } = errorStatistics(
      known.map((i) => predicted[i][k]),
      known.map((i) => y[i][k]),
    );
    return { ...property, rmsep: rms };
  });
  return { ...model, properties };
}

function reportOf(model: Model, calibration: Calibration, test: TestSet | undefined, confidence: number): string {
  const choice = choiceOf({ confidence });
  const limits = statisticLimits(model, choice);
  return calibrationReport({
    calibration,
    model,
    diagnostics: diagnose(calibration),
    choice,
    limits,
    confidence,
    warnings: warningsOf(model),
    test,
  });
}

function inJson(model: Model, { recommendation }: Calibration, options: Options) {
  return {
    model: options.out,
    id: modelId(model),
    components: model.components,
    recommended: recommendation.components,
    says: recommendation.says,
    samples: model.samples.names.length,
    excluded: options.exclude,
    properties: model.properties.map(({ name, unit, range, rmsec, sec, rmsecv, rmsep }) => ({
      name,
      unit,
      range,
      rmsec,
      sec,
      rmsecv,
      rmsep,
    })),
  };
}

function inWords(model: Model, { set, recommendation }: Calibration, options: Options): string {
  const { properties, components, samples } = model;
  const header = ["components", ...properties.map(({ name, unit }) => `RMSECV ${name}${unit && ` [${unit}]`}`)];
  const body = properties[0].rmsecv!.map((_, a) => [
    `${a}${a === components ? "  <- in the model" : ""}${a === recommendation.components ? "  (recommended)" : ""}`,
    ...properties.map(({ rmsecv }) => figure(rmsecv![a])),
  ]);
  const chosen = options.components === "auto" ? "taken as --components auto asks" : `${components} taken as asked`;
  const lines = [
    `${samples.names.length} samples, ${describeAxis(set.spectra.axis)}; steps: ${writeSteps(options.steps)}; validated by ${options.validate.text}`,
    "",
    columns([header, ...body]),
    "",
    `Recommended by the one-standard-error rule: ${recommendation.components}, ${recommendation.says}; ${chosen}.`,
    ...properties.map(({ name, unit, range, rmsec, rmsep, rmsecv }) =>
      `${name}: ${figure(range[0])} to ${figure(range[1])} ${unit}; RMSEC ${figure(rmsec)}, RMSECV ${figure(rmsecv![components])}${rmsep === undefined ? "" : `, RMSEP ${figure(rmsep)}`}`.replace(
        / ;/,
        ";",
      ),
    ),
    ...(options.exclude.length > 0 ? [excludedInWords(model)] : []),
    `Wrote ${options.out} (model ${modelId(model).slice(0, 12)}).`,
  ];
  return `${lines.join("\n")}\n`;
}

function excludedInWords({ samples }: Model): string {
  return `Excluded: ${samples.excluded.map(({ name }) => name).join(", ")}.`;
}
