export interface ProcessClock {
  /** process time now, epoch ms */
  now(): number;
  /** wall-clock ms from now until a moment of process time; 0 when it has come */
  untilMs(time: number): number;
}

/**
 * Process time that begins at `start` and runs `speed` times as fast as the wall clock, until it catches up with it: from then on they are one,
 * for a reading from the future is refused by whoever receives it.
 *
 * @param wall the wall clock, epoch ms
 */
export function processClock(wall: () => number, { start, speed }: { start: number; speed: number }): ProcessClock {
  const began = wall();
  const fast = () => start + (wall() - began) * speed;
  return {
    now: () => Math.min(fast(), wall()),
    untilMs: (time) => Math.max(0, (time - fast()) / speed, time - wall()),
  };
}
