import { applySteps, fitSteps, type Spectra, type Step } from "../spectrum/index.ts";
import { FitError } from "./fit-error.ts";
import { fitUpTo, type PlsFit } from "./fit-pls.ts";
import { coefficientsOf } from "./rotations.ts";
import type { Segments } from "./segments.ts";

/** Spectra with reference values. */
export interface CalibrationSet {
  spectra: Spectra;
  /** n × m, in their own units, none missing */
  y: readonly Float64Array[];
  propertyNames: readonly string[];
}

export interface CrossValidationOptions {
  steps: readonly Step[];
  /** the most components to try */
  components: number;
  scaleY: boolean;
  segments: Segments;
  /** called after each segment */
  onProgress?: (done: number, of: number) => void;
  /** also keep residual spectra and coefficients, which take much room, at this number of components */
  keepAt?: number;
}

/** What each sample looks like to the model that was fitted without it. */
export interface CrossValidation {
  /** the most components that every segment's fit could take, at most those asked */
  components: number;
  /** ŷ by number of components, 0 … components: n × m each. 0 components predict the mean */
  predicted: Float64Array[][];
  /** Q by number of components: n each */
  q: Float64Array[];
  /** T² by number of components, each with the covariance of its own fit: n each */
  t2: Float64Array[];
  /** t of each sample by the fit without it: n × components */
  scores: Float64Array[];
  /** u of each sample by that fit, from the y that is left before each component: n × components */
  yScores: Float64Array[];
  /** at `keepAt`: the residual spectra n × channels, and each segment's coefficients B, m × channels */
  kept?: { residuals: Float64Array[]; coefficients: Float64Array[][] };
}

/**
 * Cross-validates: for each segment every step and the PLS model are fitted on the other samples, and the segment is predicted.
 *
 * @throws StepError, FitError when a segment's remaining samples cannot be fitted, naming the segment
 *
 * Checked against R's pls on gasoline (leave-one-out predictions): test/reference/gasoline.test.ts.
 */
export function crossValidate(set: CalibrationSet, options: CrossValidationOptions): CrossValidation {
  const n = set.y.length;
  const { segments, components: most } = options;
  const smallest = n - Math.max(...segments.map((segment) => segment.length));
  const limit = Math.min(most, smallest - 1);
  const predicted = Array.from({ length: limit + 1 }, () => blank(n, set.y[0].length));
  const q = blank(limit + 1, n);
  const t2 = blank(limit + 1, n);
  const scores = blank(n, limit);
  const yScores = blank(n, limit);
  const residuals: Float64Array[] = [];
  const coefficients: Float64Array[][] = [];
  let reached = limit;
  segments.forEach((segment, s) => {
    const { fit, heldOut } = fitWithout(set, segment, limit, options);
    reached = Math.min(reached, fit.components);
    const variances = scoreVariances(fit);
    segment.forEach((i, k) => {
      walkComponents(heldOut[k], set.y[i], fit, variances, reached, options.keepAt, {
        visit(a, yHat, qHere, t2Here) {
          predicted[a][i].set(yHat);
          q[a][i] = qHere;
          t2[a][i] = t2Here;
        },
        component(a, t, u) {
          scores[i][a] = t;
          yScores[i][a] = u;
        },
        keep(residual) {
          residuals[i] = residual;
        },
      });
    });
    if (options.keepAt !== undefined) coefficients.push(coefficientsAt(fit, options.keepAt));
    options.onProgress?.(s + 1, segments.length);
  });
  return {
    components: reached,
    predicted: predicted.slice(0, reached + 1),
    q: q.slice(0, reached + 1),
    t2: t2.slice(0, reached + 1),
    scores: scores.map((row) => row.slice(0, reached)),
    yScores: yScores.map((row) => row.slice(0, reached)),
    ...(options.keepAt !== undefined && options.keepAt <= reached && { kept: { residuals, coefficients } }),
  };
}

function fitWithout(
  { spectra, y }: CalibrationSet,
  segment: readonly number[],
  components: number,
  { steps, scaleY }: CrossValidationOptions,
): { fit: PlsFit; heldOut: readonly Float64Array[] } {
  const out = new Set(segment);
  const pick = <T>(list: readonly T[], wanted: boolean) => list.filter((_, i) => out.has(i) === wanted);
  const part = (wanted: boolean): Spectra => ({
    axis: spectra.axis,
    rows: pick(spectra.rows, wanted),
    names: pick(spectra.names, wanted),
  });
  const { fitted, after } = fitSteps(steps, part(false));
  const fit = fitUpTo(after.rows, pick(y, false), { components, scaleY });
  if (fit.components === 0 && components > 0) {
    throw new FitError(
      `the fit without ${pick(spectra.names, true).slice(0, 3).join(", ")}${segment.length > 3 ? " …" : ""}`,
      {
        got: "without a single component",
        expected: "spectra that have something in common with the reference values",
        todo: "Check the table, or validate in smaller segments.",
      },
    );
  }
  return { fit, heldOut: applySteps(fitted, part(true)).rows };
}

interface Visitor {
  visit(a: number, yHat: Float64Array, q: number, t2: number): void;
  component(a: number, t: number, u: number): void;
  keep(residual: Float64Array): void;
}

/** Takes one held-out spectrum through the components, deflating it as the calibration spectra were. */
function walkComponents(
  spectrum: Float64Array,
  y: Float64Array,
  { weights, loadings, yLoadings, yMean, yDeviation }: PlsFit,
  variances: Float64Array,
  most: number,
  keepAt: number | undefined,
  { visit, component, keep }: Visitor,
): void {
  const e = Float64Array.from(spectrum);
  const yHat = Float64Array.from(yMean);
  let t2 = 0;
  for (let a = 0; ; a++) {
    visit(a, yHat, dot(e, e), t2);
    if (a === keepAt) keep(Float64Array.from(e));
    if (a >= most) return;
    const t = dot(e, weights[a]);
    let u = 0;
    for (let k = 0; k < yHat.length; k++) u += ((y[k] - yHat[k]) / yDeviation[k]) * yLoadings[a][k];
    component(a, t, u / dot(yLoadings[a], yLoadings[a]));
    for (let j = 0; j < e.length; j++) e[j] -= t * loadings[a][j];
    for (let k = 0; k < yHat.length; k++) yHat[k] += t * yLoadings[a][k] * yDeviation[k];
    t2 += (t * t) / variances[a];
  }
}

/** Scores of one fit are orthogonal with mean zero, so their covariance is diagonal. */
function scoreVariances({ scores, components }: PlsFit): Float64Array {
  return Float64Array.from({ length: components }, (_, a) => {
    let sum = 0;
    for (const row of scores) sum += row[a] * row[a];
    return sum / (scores.length - 1);
  });
}

function coefficientsAt({ rotations, yLoadings, yDeviation, components }: PlsFit, at: number): Float64Array[] {
  if (at > components) return [];
  return coefficientsOf(rotations, yLoadings, at).map((b, k) => b.map((value) => value * yDeviation[k]));
}

function blank(rows: number, columns: number): Float64Array[] {
  return Array.from({ length: rows }, () => new Float64Array(columns));
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let j = 0; j < a.length; j++) sum += a[j] * b[j];
  return sum;
}
