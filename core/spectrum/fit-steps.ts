import { type Axis, AxisError } from "./axis.ts";
import { type Apply, type FittedStep, type Spectra, type Step, StepError } from "./step.ts";
import { checkStepOrder } from "./step-order.ts";
import { absorbance, checkLight } from "./steps/absorbance.ts";
import { center, fitCenter } from "./steps/center.ts";
import { checkDetrend, detrend } from "./steps/detrend.ts";
import { fitMsc, msc } from "./steps/msc.ts";
import { checkNotZero, normalise } from "./steps/normalise.ts";
import { offset } from "./steps/offset.ts";
import { checkSavitzkyGolay, savitzkyGolay } from "./steps/savitzky-golay.ts";
import { fitScale, scale } from "./steps/scale.ts";
import { axisAfterSelect, channelsOf, select } from "./steps/select.ts";
import { checkNotFlat, snv } from "./steps/snv.ts";

/**
 * Fits the steps, each on what the ones before it leave of the calibration spectra, and applies them. The spectra are not changed.
 *
 * @returns the fitted steps, and the spectra after them on the axis after them
 * @throws StepError or AxisError when a step stands in a senseless place or cannot be done on these spectra, naming the sample or channel
 */
export function fitSteps(steps: readonly Step[], spectra: Spectra): { fitted: FittedStep[]; after: Spectra } {
  checkStepOrder(steps);
  const fitted: FittedStep[] = [];
  let after = spectra;
  for (const step of steps) {
    const learnt = fitStep(step, after);
    fitted.push(learnt);
    after = applyStep(learnt, after);
  }
  return { fitted, after };
}

/** The steps one after the other, as they are defined; {@link compileSteps} does the same in fewer walks. */
export function applySteps(steps: readonly FittedStep[], spectra: Spectra): Spectra {
  return steps.reduce((before, step) => applyStep(step, before), spectra);
}

/** The axis that the steps leave. @throws StepError or AxisError when they do not fit the axis, or their parameters do not. */
export function axisAfterSteps(steps: readonly FittedStep[], axis: Axis): Axis {
  return steps.reduce(axisAfter, axis);
}

function fitStep(step: Step, spectra: Spectra): FittedStep {
  switch (step.step) {
    case "absorbance":
      checkLight(spectra);
      return { step: step.step };
    case "snv":
      checkNotFlat(spectra, "snv");
      return { step: step.step };
    case "normalise":
      checkNotZero(spectra, step);
      return { ...step };
    case "msc":
      return fitMsc(spectra);
    case "center":
      return fitCenter(spectra);
    case "scale":
      return fitScale(spectra);
    case "detrend":
    case "offset":
    case "savitzky-golay":
    case "select":
      return { ...step };
    default:
      return step satisfies never;
  }
}

function applyStep(step: FittedStep, { axis, rows, names }: Spectra): Spectra {
  const next = axisAfter(axis, step);
  const apply = applier(step, axis);
  return {
    axis: next,
    names,
    rows: rows.map((row) => {
      const out = new Float64Array(next.points.length);
      apply(row, out);
      return out;
    }),
  };
}

function axisAfter(axis: Axis, step: FittedStep): Axis {
  switch (step.step) {
    case "savitzky-golay":
      checkSavitzkyGolay(step, axis);
      return axis;
    case "detrend":
      checkDetrend(step, axis);
      return axis;
    case "offset":
      if (step.range) channelsOf([step.range], axis, "offset");
      return axis;
    case "select":
      return axisAfterSelect(step, axis);
    case "msc":
      checkLength("msc: the reference", step.reference, axis);
      return axis;
    case "center":
      checkLength("center: the mean", step.mean, axis);
      return axis;
    case "scale": {
      checkLength("scale: the deviation", step.deviation, axis);
      const bad = step.deviation.findIndex((value) => !(value > 0));
      if (bad < 0) return axis;
      const todo = "A channel without spread cannot be scaled: leave it out with select.";
      throw new StepError(`scale: the deviation at ${axis.points[bad]} ${axis.unit}`, {
        got: `${step.deviation[bad]}`,
        expected: "above 0",
        todo,
      });
    }
    default:
      return axis;
  }
}

function applier(step: FittedStep, axis: Axis): Apply {
  switch (step.step) {
    case "absorbance":
      return absorbance();
    case "savitzky-golay":
      return savitzkyGolay(step, axis);
    case "snv":
      return snv();
    case "msc":
      return msc(step);
    case "detrend":
      return detrend(step, axis);
    case "offset":
      return offset(step, axis);
    case "normalise":
      return normalise(step);
    case "select":
      return select(step, axis);
    case "center":
      return center(step);
    case "scale":
      return scale(step);
    default:
      return step satisfies never;
  }
}

function checkLength(where: string, values: readonly number[], axis: Axis): void {
  if (values.length === axis.points.length) return;
  throw new AxisError(where, {
    got: `${values.length} values`,
    expected: `${axis.points.length}, one for each channel that the steps before it leave`,
    todo: "Fit the steps again on this axis.",
  });
}
