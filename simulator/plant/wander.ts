import { hash32, keyOf } from "./random.ts";

/** A slow movement that is a function of absolute time alone: nothing is carried from one moment to the next. */
export type Wander = (time: number) => number;

/**
 * Smooth noise within [−1, 1]: random values on an even lattice of absolute time, joined by a smooth step (3u² − 2u³).
 * History, a restart and the live run therefore continue each other without a seam.
 *
 * @param spacingMs distance of the lattice, ms: about the time in which the value forgets where it was
 */
export function wander(seed: number, name: string, spacingMs: number): Wander {
  const key = keyOf(name);
  const at = (place: number) => hash32(seed, key, place) / 0x8000_0000 - 1;
  return (time) => {
    const place = Math.floor(time / spacingMs);
    const u = time / spacingMs - place;
    const from = at(place);
    return from + (at(place + 1) - from) * u * u * (3 - 2 * u);
  };
}

/** Several wanders added, each with its share; within ± the sum of the shares. */
export function wanders(seed: number, name: string, scales: readonly { spacingMs: number; share: number }[]): Wander {
  const parts = scales.map(({ spacingMs, share }) => ({ of: wander(seed, `${name}/${spacingMs}`, spacingMs), share }));
  return (time) => {
    let sum = 0;
    for (const part of parts) sum += part.share * part.of(time);
    return sum;
  };
}
