import { type Axis, AxisError, axisAfterSteps, axisFromSpec, describeAxis, StepError } from "../spectrum/index.ts";
import type { Model } from "./model.ts";
import { ModelFileError } from "./model-file-error.ts";

const todo = "Export the model again; a model that is in charge stays in charge.";

/**
 * Checks what the schema cannot say: dimensions, what must come together, and that every number is finite.
 *
 * @throws ModelFileError naming the first field that does not fit
 */
export function checkModel(model: Model, file: string): void {
  checkFinite(model, "", file);
  const axis = inField("axis", file, () => axisFromSpec(model.axis));
  const after = inField("steps", file, () => axisAfterSteps(model.steps, axis));
  checkStructure(model, file);
  checkMatrices(model, axis, after, file);
  checkProperties(model, file);
}

/** A model has weights, loadings and y-loadings together, or coefficients alone. */
function checkStructure(model: Model, file: string): void {
  const parts = ["weights", "loadings", "yLoadings"] as const;
  const missing = parts.filter((part) => model[part] === undefined);
  const given = parts.filter((part) => model[part] !== undefined);
  if (model.coefficients) {
    if (given.length > 0)
      throw fault(file, "coefficients", `given beside ${given.join(", ")}`, "either of the two, not both");
    if (model.components !== 0)
      throw fault(file, "components", `${model.components}`, "0 for a model of coefficients alone");
    const needless = (["scores", "yScores", "residuals"] as const).find((part) => model[part] !== undefined);
    if (needless) throw fault(file, needless, "given", "none for a model of coefficients alone");
    return;
  }
  if (missing.length > 0) throw fault(file, missing[0], "missing", "weights, loadings and yLoadings, or coefficients");
  if (model.components < 1) throw fault(file, "components", `${model.components}`, "at least 1");
}

function checkMatrices(model: Model, axis: Axis, after: Axis, file: string): void {
  const m = model.properties.length;
  const n = model.samples.names.length;
  const channels = { count: after.points.length, what: `one for each channel after the steps, ${describeAxis(after)}` };
  const onAxis = { count: axis.points.length, what: `one for each point of the axis, ${describeAxis(axis)}` };
  const components = { count: model.components, what: "one for each component" };
  const properties = { count: m, what: "one for each property" };
  const samples = { count: n, what: "one for each name in samples.names" };
  const check = (field: string, values: readonly unknown[] | undefined, ...sizes: Size[]) =>
    values && checkSizes(field, values, sizes, file);

  check("weights", model.weights, components, channels);
  check("loadings", model.loadings, components, channels);
  check("yLoadings", model.yLoadings, components, properties);
  check("coefficients", model.coefficients, properties, channels);
  check("samples.reference", model.samples.reference, samples, properties);
  check("scores", model.scores, samples, components);
  check("yScores", model.yScores, samples, components);
  check("residuals.fit.q", model.residuals?.fit.q, samples);
  check("residuals.crossValidated.q", model.residuals?.crossValidated?.q, samples);
  check("residuals.crossValidated.t2", model.residuals?.crossValidated?.t2, samples);
  check("crossValidation.predicted", model.crossValidation?.predicted, samples, properties);
  check("band.mean", model.band?.mean, onAxis);
  check("band.low", model.band?.low, onAxis);
  check("band.high", model.band?.high, onAxis);
  if (model.scores && n < model.components + 2) {
    throw fault(
      file,
      "scores",
      `of ${n} samples`,
      `at least ${model.components + 2} samples for ${model.components} components`,
    );
  }
}

function checkProperties(model: Model, file: string): void {
  model.properties.forEach(({ name, range }, k) => {
    const field = `properties[${k}]`;
    const first = model.properties.findIndex((other) => other.name === name);
    if (first !== k) throw fault(file, `${field}.name`, `"${name}", as properties[${first}]`, "a name of its own");
    if (range[0] > range[1])
      throw fault(file, `${field}.range`, `${range[0]} to ${range[1]}`, "smallest, then largest");
  });
}

interface Size {
  count: number;
  what: string;
}

function checkSizes(field: string, values: readonly unknown[], [size, ...rest]: Size[], file: string): void {
  if (values.length !== size.count) {
    const things = rest.length > 0 ? "rows" : "values";
    throw fault(file, field, `${values.length} ${things}`, `${size.count} (${size.what})`);
  }
  if (rest.length === 0) return;
  values.forEach((row, i) => {
    checkSizes(`${field}[${i}]`, row as unknown[], rest, file);
  });
}

/** JSON has no NaN, but 1e999 parses as infinite, and a model may come from a program instead of a file. */
function checkFinite(value: unknown, path: string, file: string): void {
  if (typeof value === "number" && !Number.isFinite(value)) {
    throw fault(file, path, `${value}`, "a finite number");
  }
  if (Array.isArray(value)) {
    for (let i = 0; i < value.length; i++) checkFinite(value[i], `${path}[${i}]`, file);
  } else if (typeof value === "object" && value !== null) {
    for (const [key, part] of Object.entries(value)) checkFinite(part, path === "" ? key : `${path}.${key}`, file);
  }
}

function inField<T>(field: string, file: string, work: () => T): T {
  try {
    return work();
  } catch (cause) {
    if (!(cause instanceof AxisError || cause instanceof StepError)) throw cause;
    throw new ModelFileError(file, field, {
      got: `wrong: ${cause.message.replace(/\.$/, "")}`,
      expected: "one that fits",
      todo,
      cause,
    });
  }
}

function fault(file: string, field: string, got: string, expected: string): ModelFileError {
  return new ModelFileError(file, field, { got, expected, todo });
}
