import type { LabBiasWatch } from "../limit-set/index.ts";
import { biasTest } from "./bias-test.ts";
import { runsOf } from "./stretches.ts";

/** What a lab-bias alarm remembers of one pair. */
export interface RememberedPair {
  /** sample time, epoch ms; with method and sample the result's identity within its property */
  time: number;
  method: string;
  sample: string;
  predicted: number;
  laboratory: number;
  model: string;
}

/** The predictions against the laboratory over the newest pairs. */
export interface LabBias {
  bias: number;
  p: number;
  n: number;
  /** sample time of the first pair at the present level */
  since: number;
}

/**
 * The bias over the newest `count` pairs that the present model predicted; undefined while there are fewer.
 *
 * @param pairs of one property, in order of time
 */
export function labBias(pairs: readonly RememberedPair[], count: number): LabBias | undefined {
  const model = pairs.at(-1)?.model;
  const ours = pairs.filter((pair) => pair.model === model);
  if (ours.length < count) return undefined;
  const errors = ours.map(({ predicted, laboratory }) => predicted - laboratory);
  const { bias, p, n } = biasTest(errors.slice(-count));
  return { bias, p, n, since: ours[runsOf(errors).at(-1)!.first].time };
}

/**
 * Beyond: the bias is larger than the one that was said beforehand to matter (ASTM D6708: large sets make trifles significant), and chance
 * does not explain it.
 */
export function labBiasCondition(
  found: LabBias | undefined,
  { bias, deadband, confidence }: LabBiasWatch,
): "beyond" | "between" | "clear" | "none" {
  if (!found) return "none";
  const size = Math.abs(found.bias);
  if (size > bias && found.p < 1 - confidence) return "beyond";
  return size <= bias - deadband ? "clear" : "between";
}
