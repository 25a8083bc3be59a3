import { type PlantStreamId, streamIds } from "../plant/index.ts";

/**
 * The moments at which the analyzers read: multiples of the period since the epoch, the streams staggered within it. The place of a moment on
 * this grid is the reading's sequence number, so it is the same after a restart and rises with time.
 */
export interface Grid {
  periodMs: number;
}

/** Moment of a reading, epoch ms (whole). */
export function timeOf({ periodMs }: Grid, stream: PlantStreamId, sequence: number): number {
  return sequence * periodMs + staggerMs(periodMs, stream);
}

/** Sequence number of the first reading at or after a moment. */
export function sequenceFrom({ periodMs }: Grid, stream: PlantStreamId, time: number): number {
  return Math.ceil((time - staggerMs(periodMs, stream)) / periodMs);
}

function staggerMs(periodMs: number, stream: PlantStreamId): number {
  return Math.floor((streamIds.indexOf(stream) * periodMs) / streamIds.length);
}
