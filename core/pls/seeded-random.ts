/**
 * A stream of numbers in [0, 1) that a seed fixes: mulberry32, 32 bits of state. Good enough to shuffle samples, not for anything secret.
 *
 * Source: the generator "mulberry32" by Tommy Ettinger, public domain (from memory).
 */
export function seededRandom(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4294967296;
  };
}
