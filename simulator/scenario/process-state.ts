import { type PlantStreamId, streamPlans } from "../plant/index.ts";
import type { PlantEvent } from "./event.ts";

/** What the plant says of a line on `…/state`. */
export interface ProcessState {
  state: "running" | "cleaning";
  grade: string;
}

/** The state of a line at a moment. It is known from the control system, so it has no lag. */
export function processStateAt(events: readonly PlantEvent[], stream: PlantStreamId, time: number): ProcessState {
  const now = events.filter((event) => event.stream === stream && event.start <= time && time < event.end);
  const { usual, other } = streamPlans[stream].grades;
  return {
    state: now.some(({ kind }) => kind === "cleaning") ? "cleaning" : "running",
    grade: now.some(({ kind }) => kind === "grade-change") ? other : usual,
  };
}
