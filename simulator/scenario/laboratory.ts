import type { LabMessage } from "../../core/messages/index.ts";
import {
  conditionsAt,
  hash32,
  keyOf,
  laboratoryError,
  type Plant,
  type PlantStreamId,
  streamIds,
  streamPlans,
  uniformAt,
} from "../plant/index.ts";
import { disturbanceAt } from "./disturbance-at.ts";
import type { PlantEvent } from "./event.ts";
import { processStateAt } from "./process-state.ts";

/** How often a grab sample is drawn of each line, and how long the laboratory takes over it. */
export interface LabSchedule {
  everyMs: number;
  turnaroundMs: number;
}

const hour = 3_600_000;
/** Six samples a day and line; the result is there two to three hours later. */
export const usualSchedule: LabSchedule = { everyMs: 4 * hour, turnaroundMs: 2.5 * hour };

/** One grab sample of a line. */
export interface GrabSample {
  stream: PlantStreamId;
  /** its place in the schedule since the epoch */
  number: number;
  /** when it was drawn, and when its results are there; epoch ms */
  drawn: number;
  reported: number;
}

/**
 * The samples of a line whose results are there at `from` < reported ≤ `to`, in order of being drawn. Samplers are punctual to an eighth of the
 * interval. A function of its arguments alone.
 */
export function samplesReported(
  { everyMs, turnaroundMs }: LabSchedule,
  seed: number,
  stream: PlantStreamId,
  from: number,
  to: number,
): GrabSample[] {
  const first = Math.floor((from - 1.2 * turnaroundMs) / everyMs) - 1;
  const found: GrabSample[] = [];
  for (let number = first; number * everyMs <= to; number++) {
    const late = uniformAt(seed, keyOf(`${stream}/sampler`), number) / 8;
    const turn = streamIds.indexOf(stream) / streamIds.length;
    const drawn = Math.round(((number + turn + late) * everyMs) / 1000) * 1000;
    const reported = Math.round(drawn + turnaroundMs * (0.8 + 0.4 * uniformAt(seed, keyOf(`${stream}/bench`), number)));
    if (from < reported && reported <= to) found.push({ stream, number, drawn, reported });
  }
  return found;
}

/**
 * What the laboratory reports of a sample: what truly was in it, with the laboratory's own error and the bias of an aged reagent. Nothing while
 * the line is washed: nobody draws a sample then.
 */
export function resultsOf(plant: Plant, events: readonly PlantEvent[], sample: GrabSample): LabMessage[] {
  const { stream, number, drawn } = sample;
  if (processStateAt(events, stream, drawn).state === "cleaning") return [];
  const plan = streamPlans[stream];
  const { composition } = conditionsAt(plant, stream, drawn, disturbanceAt(events, stream, drawn));
  return plan.properties.map(({ name, unit, error }) => {
    const truth = 100 * composition[name];
    const noise = laboratoryError(error, truth, hash32(plant.seed, keyOf(`${stream}/laboratory/${name}`), number));
    const value = truth + noise + reagentBias(events, stream, name, drawn);
    return {
      time: new Date(drawn).toISOString(),
      property: name,
      value: Number(value.toFixed(truth < 1 ? 4 : 2)),
      unit,
      method: name === "water" ? "Karl Fischer titration" : "gas chromatography",
      sample: `${stream.slice(3)}-${number}`,
    };
  });
}

function reagentBias(events: readonly PlantEvent[], stream: PlantStreamId, property: string, drawn: number): number {
  const { reagent } = streamPlans[stream].sizes;
  if (property !== reagent.property) return 0;
  const aged = events.filter(
    ({ kind, stream: where, start, end }) => kind === "lab-bias" && where === stream && start <= drawn && drawn < end,
  );
  return aged.reduce((sum, { size }) => sum + size * reagent.bias, 0);
}
