import { calibrationT2 } from "../limits/index.ts";
import type { CompiledModel } from "./compile-model.ts";

/** Where the calibration samples stand: the company that a reading is seen in. Ratios are to the limits given; 1 is the limit. */
export interface CalibrationPlaces {
  names: string[];
  /** n × A */
  scores: number[][];
  fit: { t2: number[]; q: number[]; t2Ratios: number[]; qRatios: number[] };
  /** each sample against the model fitted without it: this is how a new reading of the same kind would look */
  crossValidated?: { t2: number[]; q: number[]; t2Ratios: number[]; qRatios: number[] };
}

/** @returns undefined when the model keeps no scores or no residuals */
export function calibrationPlaces(
  { model, kernel }: CompiledModel,
  limits: { t2: number; q: number },
): CalibrationPlaces | undefined {
  if (!model.scores || !model.residuals || !kernel.space) return undefined;
  const { fit, crossValidated } = model.residuals;
  const ratios = (t2: number[], q: number[]) => ({
    t2,
    q,
    t2Ratios: t2.map((value) => value / limits.t2),
    qRatios: q.map((value) => value / limits.q),
  });
  return {
    names: model.samples.names,
    scores: model.scores,
    fit: ratios(Array.from(calibrationT2(kernel.space)), fit.q),
    ...(crossValidated && { crossValidated: ratios(crossValidated.t2, crossValidated.q) }),
  };
}
