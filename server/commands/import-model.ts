import { basename } from "node:path";
import { Command, Option } from "commander";
import { residualEigenvalues } from "../../core/limits/index.ts";
import { checkModel, type Model, type ModelProperty, modelId } from "../../core/model/index.ts";
import {
  type Axis,
  axisAfterSteps,
  axisFromSpec,
  describeAxis,
  type FittedStep,
  type Step,
  specOfAxis,
} from "../../core/spectrum/index.ts";
import { writeWhole } from "./files.ts";
import { ImportError } from "./import-error.ts";
import { warningsOf } from "./inspect.ts";
import { readMatrix, readVector } from "./matrix-file.ts";
import { countOption, stepsOption, unitOption } from "./option-values.ts";

interface Options {
  axis: string;
  axisUnit: Axis["unit"];
  property: string[];
  unit?: Record<string, string>;
  range?: Record<string, [number, number]>;
  steps: Step[];
  mean?: string;
  deviation?: string;
  reference?: string;
  coefficients?: string;
  intercept?: string;
  weights?: string;
  loadings?: string;
  yLoadings?: string;
  yMean?: string;
  yDeviation?: string;
  components?: number;
  scores?: string;
  residuals?: string;
  sec?: string;
  name?: string;
  notes?: string;
  out: string;
  json?: boolean;
}

export function importModelCommand(): Command {
  return new Command("import-model")
    .description("make a model file of a model that was fitted elsewhere, from CSV matrices")
    .requiredOption("--axis <file>", "points of the axis of the raw spectra")
    .addOption(new Option("--axis-unit <unit>", "their unit").choices(["nm", "cm-1"]).default("nm"))
    .requiredOption("--property <name...>", "names of the properties, in the order of the matrices' columns")
    .option("--unit <name=unit>", "unit of a property; repeat for several", unitOption)
    .option("--range <name=from:to>", "calibrated range of a property; repeat for several", rangeOption)
    .option("--steps <steps>", "steps before the model, as calibrate takes them", stepsOption, stepsOption("center"))
    .option("--mean <file>", "mean spectrum for the step center, one value for each channel after the steps before it")
    .option("--deviation <file>", "standard deviations for the step scale")
    .option("--reference <file>", "reference spectrum for the step msc")
    .option("--coefficients <file>", "coefficients: channels × properties, per unit of the property")
    .option(
      "--intercept <file>",
      "with coefficients: the prediction where the spectrum after the steps is zero, one for each property",
    )
    .option("--weights <file>", "weights W: channels × components")
    .option("--loadings <file>", "loadings P: channels × components")
    .option("--y-loadings <file>", "y-loadings Q: properties × components")
    .option("--y-mean <file>", "with weights: mean of each property")
    .option("--y-deviation <file>", "with weights: what each property was divided by (default: 1)")
    .option("--components <n>", "use the first n columns only", countOption)
    .option(
      "--scores <file>",
      "scores T of the calibration samples: samples × components; without them T² cannot be judged",
    )
    .option(
      "--residuals <file>",
      "residual spectra of the calibration samples: samples × channels; without them Q has no limit",
    )
    .option("--sec <file>", "standard error of calibration of each property; without it no uncertainty is given")
    .option("--name <name>", "name of the model (default: from the file's name)")
    .option("--notes <text>", "notes to keep in the model: where it came from")
    .requiredOption("--out <file>", "model file to write (*.model.json)")
    .option("--json", "print what was made as JSON")
    .addHelpText(
      "after",
      "\nMatrices are CSV of numbers alone, without a header, one row a line. A file may lie on its side where its shape leaves no doubt.",
    )
    .action(runImport);
}

/** NAME=FROM:TO, gathered over repeats. */
function rangeOption(text: string, earlier: Record<string, [number, number]> = {}): Record<string, [number, number]> {
  const found = /^(.+)=([^:]+):([^:]+)$/.exec(text);
  const [from, to] = [Number(found?.[2]), Number(found?.[3])];
  if (!found || !(from <= to))
    throw new ImportError("--range", text, "NAME=FROM:TO with FROM not above TO, such as ethanol=20:45");
  return { ...earlier, [found[1]]: [from, to] };
}

async function runImport(options: Options): Promise<void> {
  const axis = axisFromSpec({ unit: options.axisUnit, points: await readVector(options.axis, undefined, "points") });
  const steps = await fittedSteps(options, axis);
  const channels = axisAfterSteps(steps, axis).points.length;
  const inner = options.coefficients ? await byCoefficients(options, channels) : await byComponents(options, channels);
  const model: Model = {
    format: "millrace-model",
    formatVersion: 1,
    name: options.name ?? basename(options.out).replace(/(\.model)?\.json$/, ""),
    created: new Date().toISOString(),
    origin: "imported",
    notes: options.notes ?? "",
    axis: specOfAxis(axis),
    steps,
    ...inner,
  };
  checkModel(model, options.out);
  await writeWhole(options.out, `${JSON.stringify(model)}\n`);
  const warnings = warningsOf(model);
  const summary = {
    model: options.out,
    id: modelId(model),
    components: model.components,
    axis: describeAxis(axis),
    warnings,
  };
  process.stdout.write(options.json ? `${JSON.stringify(summary)}\n` : inWords(summary));
}

function inWords({
  model,
  id,
  components,
  axis,
  warnings,
}: {
  model: string;
  id: string;
  components: number;
  axis: string;
  warnings: string[];
}): string {
  const what = components === 0 ? "coefficients alone" : `${components} components`;
  return `${[`Wrote ${model} (model ${id.slice(0, 12)}): ${what}, ${axis}.`, ...warnings.map((warning) => `Mind: ${warning}`)].join("\n")}\n`;
}

/** The steps with what they need to know, each from its file. */
async function fittedSteps(options: Options, axis: Axis): Promise<FittedStep[]> {
  const fitted: FittedStep[] = [];
  for (const step of options.steps) {
    const channels = axisAfterSteps(fitted, axis).points.length;
    const learnt = async (option: string, file: string | undefined) => {
      if (file === undefined) throw new ImportError(option, "missing", `a file, which the step ${step.step} needs`);
      return readVector(file, channels, "channels");
    };
    if (step.step === "center") fitted.push({ step: "center", mean: await learnt("--mean", options.mean) });
    else if (step.step === "scale")
      fitted.push({ step: "scale", deviation: await learnt("--deviation", options.deviation) });
    else if (step.step === "msc")
      fitted.push({ step: "msc", reference: await learnt("--reference", options.reference) });
    else fitted.push(step);
  }
  return fitted;
}

type Inner = Omit<Model, "format" | "formatVersion" | "name" | "created" | "origin" | "notes" | "axis" | "steps">;

async function byCoefficients(options: Options, channels: number): Promise<Inner> {
  const m = options.property.length;
  const needless = (
    ["weights", "loadings", "yLoadings", "scores", "residuals", "yMean", "yDeviation", "components"] as const
  ).find((name) => options[name] !== undefined);
  if (needless) {
    throw new ImportError(
      optionName(needless),
      "given beside --coefficients",
      "either coefficients alone, or weights, loadings and y-loadings",
    );
  }
  const coefficients = transposed(await readMatrix(options.coefficients!, channels, m, "channels × properties"));
  const intercept = options.intercept ? await readVector(options.intercept, m, "properties") : undefined;
  if (!intercept)
    throw new ImportError("--intercept", "missing", "a file with the prediction at zero for each property");
  return {
    properties: await propertiesOf(
      options,
      intercept,
      options.property.map(() => 1),
    ),
    components: 0,
    coefficients,
    samples: { names: [], excluded: [] },
  };
}

async function byComponents(options: Options, channels: number): Promise<Inner> {
  const { weights, loadings, yLoadings, yMean } = options;
  if (!weights || !loadings || !yLoadings || !yMean) {
    const missing = Object.entries({
      "--weights": weights,
      "--loadings": loadings,
      "--y-loadings": yLoadings,
      "--y-mean": yMean,
    })
      .filter(([, file]) => !file)
      .map(([name]) => name);
    throw new ImportError(
      missing.join(", "),
      "missing",
      "all of --weights, --loadings, --y-loadings and --y-mean, or --coefficients and --intercept",
    );
  }
  if (options.intercept)
    throw new ImportError("--intercept", "given", "none with weights: --y-mean says where the prediction starts");
  const m = options.property.length;
  const W = transposed(await readMatrix(weights, channels, undefined, "channels × components"));
  const given = W.length;
  const A = options.components ?? given;
  if (A > given) throw new ImportError("--components", `${A}`, `at most ${given}, which ${weights} holds`);
  const first = (rows: number[][]) => rows.slice(0, A);
  const scores = options.scores && (await readMatrix(options.scores, undefined, given, "samples × components"));
  const n = scores ? scores.length : undefined;
  const residuals = options.residuals && (await readMatrix(options.residuals, n, channels, "samples × channels"));
  const samples = n ?? (residuals ? residuals.length : 0);
  return {
    properties: await propertiesOf(
      options,
      await readVector(yMean, m, "properties"),
      options.yDeviation ? await readVector(options.yDeviation, m, "properties") : options.property.map(() => 1),
    ),
    components: A,
    weights: first(W),
    loadings: first(transposed(await readMatrix(loadings, channels, given, "channels × components"))),
    yLoadings: first(transposed(await readMatrix(yLoadings, m, given, "properties × components"))),
    samples: { names: Array.from({ length: samples }, (_, i) => String(i + 1)), excluded: [] },
    ...(scores && {
      scores: centred(
        scores.map((row) => row.slice(0, A)),
        options.scores!,
      ),
    }),
    ...(residuals && { residuals: { fit: residualsOf(residuals) } }),
  };
}

async function propertiesOf(options: Options, mean: number[], deviation: number[]): Promise<ModelProperty[]> {
  const sec = options.sec ? await readVector(options.sec, mean.length, "properties") : undefined;
  return options.property.map((name, k) => {
    const range = options.range?.[name];
    if (!range)
      throw new ImportError(
        `--range for ${name}`,
        "missing",
        `${name}=FROM:TO, the range that the model was calibrated for`,
      );
    return {
      name,
      unit: options.unit?.[name] ?? "",
      range,
      mean: mean[k],
      deviation: deviation[k],
      ...(sec && { sec: sec[k] }),
    };
  });
}

function residualsOf(rows: number[][]): { q: number[]; eigenvalues: number[] } {
  const residuals = rows.map((row) => Float64Array.from(row));
  return {
    q: residuals.map((row) => row.reduce((sum, value) => sum + value * value, 0)),
    eigenvalues: residualEigenvalues(residuals),
  };
}

/** T² is measured from the middle of the calibration: scores of another origin would be judged from a wrong place. */
function centred(scores: number[][], file: string): number[][] {
  for (let a = 0; a < scores[0].length; a++) {
    const column = scores.map((row) => row[a]);
    const mean = column.reduce((sum, value) => sum + value, 0) / column.length;
    const size = Math.sqrt(column.reduce((sum, value) => sum + value * value, 0) / column.length);
    if (!(Math.abs(mean) <= 1e-6 * size)) {
      throw new ImportError(`${file}: the mean of column ${a + 1}`, `${mean}`, "0, as scores of centred spectra have");
    }
  }
  return scores;
}

function transposed(rows: number[][]): number[][] {
  return rows[0].map((_, k) => rows.map((row) => row[k]));
}

function optionName(name: string): string {
  return `--${name.replace(/[A-Z]/g, (letter) => `-${letter.toLowerCase()}`)}`;
}
