import { conditionsAt, hash32, keyOf, measured, type Plant, type PlantStreamId } from "../plant/index.ts";
import { disturbanceAt } from "./disturbance-at.ts";
import type { PlantEvent } from "./event.ts";
import { type Grid, sequenceFrom, timeOf } from "./grid.ts";

/** One reading as the analyzer makes it. */
export interface SimulatedReading {
  stream: PlantStreamId;
  /** epoch ms */
  time: number;
  sequence: number;
  /** absorbance over `analyzerAxis` */
  values: Float32Array;
  context: { temperature: number };
}

/**
 * The reading with a given sequence number, or undefined when the analyzer is silent. A function of its arguments alone.
 *
 * @param events all that may touch the moment; order does not matter
 */
export function readingAt(
  plant: Plant,
  events: readonly PlantEvent[],
  stream: PlantStreamId,
  sequence: number,
  grid: Grid,
): SimulatedReading | undefined {
  const time = timeOf(grid, stream, sequence);
  const hold = (kind: PlantEvent["kind"]) =>
    events.find((event) => event.kind === kind && event.stream === stream && event.start <= time && time < event.end);
  if (hold("silent")) return undefined;
  const frozen = hold("frozen");
  const seen = frozen ? Math.min(sequence, sequenceFrom(grid, stream, frozen.start)) : sequence;
  return { stream, time, sequence, ...scanAt(plant, events, stream, seen, grid) };
}

function scanAt(plant: Plant, events: readonly PlantEvent[], stream: PlantStreamId, sequence: number, grid: Grid) {
  const time = timeOf(grid, stream, sequence);
  const { plan, noiseKey } = plant.lines[stream];
  const conditions = conditionsAt(plant, stream, time, disturbanceAt(events, stream, time));
  const bubble = events.find(
    (event) => event.kind === "bubble" && event.stream === stream && spoils(event, stream, sequence, grid),
  );
  if (bubble) conditions.bubble = Math.min(0.9, bubble.size * bubbleShare(plant.seed, stream, sequence));
  return {
    values: measured(plan, conditions, hash32(plant.seed, noiseKey, time)),
    context: { temperature: Math.round(conditions.temperatureC * 10) / 10 },
  };
}

/** A bubble spoils one reading: the first at or after it. */
export function spoils(bubble: PlantEvent, stream: PlantStreamId, sequence: number, grid: Grid): boolean {
  return sequenceFrom(grid, stream, bubble.start) === sequence;
}

function bubbleShare(seed: number, stream: PlantStreamId, sequence: number): number {
  return 0.05 + (0.12 * hash32(seed, keyOf(`${stream}/bubble`), sequence)) / 0x1_0000_0000;
}
