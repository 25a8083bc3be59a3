import { residualEigenvalues } from "../limits/index.ts";
import { canonicalJson, type Model, type ModelProperty } from "../model/index.ts";
import { checkStepOrder, fitSteps, type Step, StepError, specOfAxis } from "../spectrum/index.ts";
import { type CalibrationSet, type CrossValidation, crossValidate } from "./cross-validate.ts";
import { FitError } from "./fit-error.ts";
import { fitPls, type PlsFit } from "./fit-pls.ts";
import { type Recommendation, recommendComponents, rmsecvOf } from "./recommend-components.ts";
import type { Segments } from "./segments.ts";

export interface CalibrationOptions {
  name: string;
  /** RFC 3339: core has no clock */
  created: string;
  notes?: string;
  units?: Readonly<Record<string, string>>;
  steps: readonly Step[];
  /** how many components, or "auto" to take the recommended number */
  components: number | "auto";
  /** the most components to cross-validate (default 15, or those asked) */
  mostComponents?: number;
  /** divide each y by its standard deviation (default: when there are several) */
  scaleY?: boolean;
  segments: Segments;
  /** how the segments were made, in words for the record */
  validation: string;
  excluded?: readonly { name: string; reason?: string }[];
  onProgress?: (done: number, of: number) => void;
}

export interface Calibration {
  model: Model;
  set: CalibrationSet;
  fit: PlsFit;
  crossValidation: CrossValidation;
  recommendation: Recommendation;
}

/**
 * Calibrates: cross-validates, fits on all samples of the set, and makes the model. The set is not changed.
 *
 * @throws StepError or AxisError when the steps do not make sense here · FitError when the table does not hold the model asked for
 */
export function calibrate(set: CalibrationSet, options: CalibrationOptions): Calibration {
  checkSet(set);
  checkSteps(options.steps);
  const { spectra, y } = set;
  const scaleY = options.scaleY ?? y[0].length > 1;
  const asked = options.components === "auto" ? 1 : options.components;
  const most = Math.min(Math.max(asked, options.mostComponents ?? 15), y.length - 2);
  const common = { steps: options.steps, scaleY, segments: options.segments };
  const tried = crossValidate(set, { ...common, components: most, onProgress: options.onProgress });
  const recommendation = recommendComponents(tried.predicted, y);
  const components = options.components === "auto" ? recommendation.components : options.components;
  checkComponents(components, tried.components, y.length);
  const crossValidation = { ...crossValidate(set, { ...common, components, keepAt: components }), ...sizesOf(tried) };
  const { fitted, after } = fitSteps(options.steps, spectra);
  const fit = fitPls(after.rows, y, { components, scaleY });
  const model: Model = {
    format: "millrace-model",
    formatVersion: 1,
    name: options.name,
    created: options.created,
    origin: "calibrated",
    notes: options.notes ?? "",
    axis: specOfAxis(spectra.axis),
    steps: fitted,
    properties: propertiesOf(set, options, fit, crossValidation),
    components,
    weights: lists(fit.weights),
    loadings: lists(fit.loadings),
    yLoadings: lists(fit.yLoadings),
    samples: {
      names: [...spectra.names],
      excluded: (options.excluded ?? []).map((one) => ({ ...one })),
      reference: lists(y),
    },
    scores: lists(fit.scores),
    yScores: lists(fit.yScores),
    residuals: {
      fit: { q: fit.residuals.map(squareSum), eigenvalues: residualEigenvalues(fit.residuals) },
      crossValidated: {
        q: Array.from(crossValidation.q[components]),
        t2: Array.from(crossValidation.t2[components]),
        eigenvalues: residualEigenvalues(crossValidation.kept!.residuals),
      },
    },
    crossValidation: {
      method: options.validation,
      segments: options.segments.length,
      predicted: lists(crossValidation.predicted[components]),
    },
    band: bandOf(spectra.rows),
  };
  return { model: JSON.parse(canonicalJson(model)) as Model, set, fit, crossValidation, recommendation };
}

/** What was found at every number of components that was tried, beside what was kept at the chosen one. */
function sizesOf({ components, predicted, q, t2, scores, yScores }: CrossValidation) {
  return { components, predicted, q, t2, scores, yScores };
}

function checkSet({ spectra, y, propertyNames }: CalibrationSet): void {
  if (y.length < 4) {
    throw new FitError("the number of calibration samples", {
      got: `${y.length}`,
      expected: "at least 4 (ASTM E1655 asks for 24, or 6(A + 1) if that is more)",
      todo: "Take more samples.",
    });
  }
  y.forEach((row, i) => {
    row.forEach((value, k) => {
      if (Number.isFinite(value)) return;
      throw new FitError(`${propertyNames[k]} of sample ${spectra.names[i]}`, {
        got: Number.isNaN(value) ? "missing" : `${value}`,
        expected: "a reference value",
        todo: "Fill it in, or exclude the sample.",
      });
    });
  });
  propertyNames.forEach((name, k) => {
    if (y.some((row) => Math.abs(row[k] - y[0][k]) > 1e-12 * Math.abs(y[0][k]))) return;
    throw new FitError(name, {
      got: `${y[0][k]} in every sample`,
      expected: "reference values that vary",
      todo: "Leave the property out, or take samples that differ in it.",
    });
  });
  spectra.rows.forEach((row, i) => {
    const bad = row.findIndex((value) => !Number.isFinite(value));
    if (bad < 0) return;
    throw new FitError(`sample ${spectra.names[i]} at ${spectra.axis.points[bad]} ${spectra.axis.unit}`, {
      got: `${row[bad]}`,
      expected: "a finite number",
      todo: "Correct the value, or exclude the sample.",
    });
  });
}

function checkSteps(steps: readonly Step[]): void {
  checkStepOrder(steps);
  if (steps.some(({ step }) => step === "center")) return;
  throw new StepError("the steps", {
    got: steps.length === 0 ? "none" : `without center (${steps.map(({ step }) => step).join("; ")})`,
    expected: "center among them",
    todo: "Add center at the end: without it the first component describes the mean spectrum, and T² is measured from zero.",
  });
}

function checkComponents(components: number, possible: number, n: number): void {
  if (components >= 1 && components <= possible) return;
  throw new FitError("components", {
    got: `${components}`,
    expected: `1 to ${possible}: every fit of the cross-validation must hold as many, and ${n} samples must leave some freedom`,
    todo: "Take fewer components, or more and more varied samples.",
  });
}

function propertiesOf(
  { y, propertyNames }: CalibrationSet,
  { units }: CalibrationOptions,
  { scores, yLoadings, yMean, yDeviation, components }: PlsFit,
  { predicted }: CrossValidation,
): ModelProperty[] {
  const n = y.length;
  return propertyNames.map((name, k) => {
    const reference = y.map((row) => row[k]);
    let squares = 0;
    for (let i = 0; i < n; i++) {
      let value = yMean[k];
      for (let a = 0; a < components; a++) value += scores[i][a] * yLoadings[a][k] * yDeviation[k];
      squares += (value - reference[i]) ** 2;
    }
    const columns = predicted.map((rows) => rows.map((row) => row[k]));
    return {
      name,
      unit: units?.[name] ?? "",
      range: [Math.min(...reference), Math.max(...reference)],
      mean: yMean[k],
      deviation: yDeviation[k],
      rmsec: Math.sqrt(squares / n),
      sec: Math.sqrt(squares / (n - components - 1)),
      rmsecv: rmsecvOf(columns, reference),
    };
  });
}

function bandOf(rows: readonly Float64Array[]): NonNullable<Model["band"]> {
  const channel = (pick: (values: number[]) => number) =>
    Array.from(rows[0], (_, j) => pick(rows.map((row) => row[j])));
  return {
    mean: channel((values) => values.reduce((sum, value) => sum + value, 0) / values.length),
    low: channel((values) => Math.min(...values)),
    high: channel((values) => Math.max(...values)),
  };
}

function squareSum(row: Float64Array): number {
  return row.reduce((sum, value) => sum + value * value, 0);
}

function lists(rows: readonly Float64Array[]): number[][] {
  return rows.map((row) => Array.from(row));
}
