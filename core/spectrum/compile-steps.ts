import type { Axis } from "./axis.ts";
import { axisAfterSteps } from "./fit-steps.ts";
import { filter } from "./fold/filter.ts";
import { levelAtLeast, levelOver, scatter, shrinkToArea, shrinkToLength, standardise } from "./fold/level-and-size.ts";
import type { State, Walk } from "./fold/walk.ts";
import type { Apply, Fitted, FittedStep } from "./step.ts";
import { absorbance } from "./steps/absorbance.ts";
import { detrend } from "./steps/detrend.ts";
import { channelsOf } from "./steps/select.ts";

/**
 * Folds fitted steps into as few walks over a spectrum as they need. The function returned allocates nothing, does not change
 * `values`, and agrees with the steps done one by one to 1e-10 (of the largest value).
 *
 * How they fold. What snv, msc, offset and normalise do to a whole spectrum is x → (x − α) β with two numbers found in one walk, and
 * that commutes with what follows: a Savitzky–Golay filter hands α and β on (a derivative forgets α), select too. So α and β are only
 * carried along, and are worked in by the last walk together with all center and scale: y_j = ((x_j − α) β − m_j) k_j.
 */
export function compileSteps(steps: readonly FittedStep[], axis: Axis): Apply {
  const end = axisAfterSteps(steps, axis);
  const fold: Fold = { axis, walks: [], channels: undefined };
  for (const step of steps) foldStep(step, fold);
  const last = finish(fold);
  const { walks } = fold;
  const state: State = { x: new Float64Array(0), alpha: 0, beta: 1 };
  return (values, out) => {
    if (values.length !== axis.points.length || out.length !== end.points.length) {
      throw new RangeError(
        `${values.length} values into ${out.length}, expected ${axis.points.length} into ${end.points.length}`,
      );
    }
    state.x = values;
    state.alpha = 0;
    state.beta = 1;
    for (let i = 0; i < walks.length; i++) walks[i](state);
    last(state, out);
  };
}

/** What compiling has come to: the walks so far, and center and scale that wait for the next walk that writes: (v − m) k. */
interface Fold {
  axis: Axis;
  walks: Walk[];
  channels: { mean: Float64Array; factor: Float64Array } | undefined;
}

function foldStep(step: FittedStep, fold: Fold): void {
  if (step.step === "center" || step.step === "scale") {
    foldChannels(step, fold);
  } else if (step.step === "select") {
    foldSelect(step, fold);
  } else {
    settle(fold);
    fold.walks.push(walkOf(step, fold.axis));
  }
}

function walkOf(step: Exclude<FittedStep, Fitted<"center" | "scale" | "select">>, axis: Axis): Walk {
  switch (step.step) {
    case "snv":
      return standardise;
    case "msc":
      return scatter(step);
    case "offset":
      return step.range ? levelOver(channelsOf([step.range], axis, "offset")) : levelAtLeast;
    case "normalise":
      return step.by === "area" ? shrinkToArea : shrinkToLength;
    case "savitzky-golay":
      return filter(step, axis);
    case "detrend":
      return flatten(step, axis);
    case "absorbance":
      return takeLogarithm(axis);
    default:
      return step satisfies never;
  }
}

function foldChannels(step: Fitted<"center" | "scale">, fold: Fold): void {
  const p = fold.axis.points.length;
  fold.channels ??= { mean: new Float64Array(p), factor: new Float64Array(p).fill(1) };
  const { mean, factor } = fold.channels;
  for (let j = 0; j < p; j++) {
    if (step.step === "center") mean[j] += step.mean[j] / factor[j];
    else factor[j] /= step.deviation[j];
  }
}

function foldSelect(step: Fitted<"select">, fold: Fold): void {
  const kept = channelsOf(step.ranges, fold.axis, "select");
  const buffer = new Float64Array(kept.length);
  fold.walks.push((state) => {
    const { x } = state;
    for (let k = 0; k < kept.length; k++) buffer[k] = x[kept[k]];
    state.x = buffer;
  });
  const pick = (values: Float64Array) => Float64Array.from(kept, (j) => values[j]);
  fold.axis = { unit: fold.axis.unit, points: pick(fold.axis.points) };
  fold.channels &&= { mean: pick(fold.channels.mean), factor: pick(fold.channels.factor) };
}

/** Writes out center and scale that still wait, before a step that mixes channels. */
function settle(fold: Fold): void {
  if (!fold.channels) return;
  const write = finish(fold);
  const buffer = new Float64Array(fold.axis.points.length);
  fold.channels = undefined;
  fold.walks.push((state) => {
    write(state, buffer);
    state.x = buffer;
    state.alpha = 0;
    state.beta = 1;
  });
}

function finish({ channels, axis }: Fold): (state: State, out: Float64Array) => void {
  const p = axis.points.length;
  if (!channels) {
    return ({ x, alpha, beta }, out) => {
      for (let j = 0; j < p; j++) out[j] = (x[j] - alpha) * beta;
    };
  }
  const { mean, factor } = channels;
  if (factor.every((value) => value === 1)) {
    return ({ x, alpha, beta }, out) => {
      for (let j = 0; j < p; j++) out[j] = (x[j] - alpha) * beta - mean[j];
    };
  }
  return ({ x, alpha, beta }, out) => {
    for (let j = 0; j < p; j++) out[j] = ((x[j] - alpha) * beta - mean[j]) * factor[j];
  };
}

function flatten(step: Fitted<"detrend">, axis: Axis): Walk {
  const apply = detrend(step, axis);
  const buffer = new Float64Array(axis.points.length);
  return (state) => {
    apply(state.x, buffer);
    state.x = buffer;
    state.alpha = 0; // a polynomial of any order holds the constant
  };
}

function takeLogarithm(axis: Axis): Walk {
  const apply = absorbance();
  const buffer = new Float64Array(axis.points.length);
  return (state) => {
    apply(state.x, buffer);
    state.x = buffer;
  };
}
