import { absorbanceInto } from "./absorbance.ts";
import { channelCount } from "./axis.ts";
import { type Conditions, disturbed } from "./conditions.ts";
import { type Disturbance, undisturbed } from "./disturbance.ts";
import { addNoiseInPlace } from "./normal-noise.ts";
import { processOf } from "./process.ts";
import { hash32, keyOf } from "./random.ts";
import { type PlantStreamId, type StreamPlan, streamIds, streamPlans } from "./streams.ts";

interface Line {
  plan: StreamPlan;
  process: (time: number) => Conditions;
  noiseKey: number;
}

/** The invented plant: a function of its seed, a stream and absolute time. It holds no state that moves. */
export interface Plant {
  seed: number;
  lines: Record<PlantStreamId, Line>;
}

export const defaultSeed = 1;

export function makePlant(seed = defaultSeed): Plant {
  const lines = Object.fromEntries(
    streamIds.map((id) => [
      id,
      { plan: streamPlans[id], process: processOf(seed, streamPlans[id]), noiseKey: keyOf(`${id}/noise`) },
    ]),
  ) as Plant["lines"];
  return { seed, lines };
}

/** What truly flows past the probe: composition, temperature, optics. */
export function conditionsAt(
  plant: Plant,
  stream: PlantStreamId,
  time: number,
  disturbance: Disturbance = undisturbed,
): Conditions {
  const { plan, process } = plant.lines[stream];
  const calm = process(time);
  return disturbance === undisturbed ? calm : disturbed(plan, calm, disturbance);
}

/**
 * The spectrum that the analyzer of a stream sends for one moment: with its noise, rounded to float32 as the instrument does, so that a
 * float32 array carries it exactly.
 *
 * @param time epoch ms
 * @returns 301 absorbances over `analyzerAxis`
 */
export function spectrumAt(
  plant: Plant,
  stream: PlantStreamId,
  time: number,
  disturbance: Disturbance = undisturbed,
): Float32Array {
  const { plan, noiseKey } = plant.lines[stream];
  return measured(plan, conditionsAt(plant, stream, time, disturbance), hash32(plant.seed, noiseKey, time));
}

/** One scan of a line in known conditions. A worn lamp gives less light, so more noise. */
export function measured(plan: StreamPlan, conditions: Conditions, noiseState: number): Float32Array {
  const values = new Float64Array(channelCount);
  absorbanceInto(values, plan, conditions);
  addNoiseInPlace(values, noiseState, plan.noise * (1 + 20 * conditions.lamp));
  return Float32Array.from(values);
}
