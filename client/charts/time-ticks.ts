import type { PlantTime } from "../words/plant-time.ts";

const second = 1000;
const minute = 60 * second;
const hour = 60 * minute;
const day = 24 * hour;
const steps = [
  ...[1, 2, 5, 10, 15, 30].map((n) => n * second),
  ...[1, 2, 5, 10, 15, 30].map((n) => n * minute),
  ...[1, 2, 3, 4, 6, 12].map((n) => n * hour),
  ...[1, 2, 7, 14].map((n) => n * day),
];

/** The smallest round step that leaves no more than `most` ticks on the span. */
export function timeStep(spanMs: number, most: number): number {
  return steps.find((step) => spanMs / step <= most) ?? steps[steps.length - 1];
}

/**
 * Ticks on the plant's round clock times (midnight is the plant's, also on the days when the clocks change), ascending, within [from, to].
 */
export function timeTicks(from: number, to: number, stepMs: number, time: PlantTime): number[] {
  const ticks: number[] = [];
  const first = Math.ceil((from + time.offsetMs(from)) / stepMs) * stepMs;
  // One step early: the offset at the first tick may be another than at `from`.
  for (let wall = first - stepMs; wall <= to + time.offsetMs(to) + stepMs; wall += stepMs) {
    const guess = wall - time.offsetMs(wall - time.offsetMs(from));
    const at = wall - time.offsetMs(guess);
    if (at >= from && at <= to && at !== ticks[ticks.length - 1]) ticks.push(at);
  }
  return ticks;
}

/** "14:05"; "14:05:10" where the step asks for seconds; "2 Dec" at midnight and for steps of days. */
export function tickLabel(at: number, stepMs: number, time: PlantTime): string {
  const clock = time.clock(at);
  if (stepMs >= day || clock === "00:00:00") return time.day(at);
  return stepMs < minute ? clock : clock.slice(0, 5);
}
