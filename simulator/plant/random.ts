/** A number that stands for a name in `hash32` (FNV-1a, 32 bit). */
export function keyOf(name: string): number {
  let hash = 0x811c9dc5;
  for (let i = 0; i < name.length; i++) hash = Math.imul(hash ^ name.charCodeAt(i), 0x01000193);
  return hash >>> 0;
}

/**
 * An evenly spread 32-bit number that depends on the seed, a name's key and a whole-numbered place, and on nothing that went before:
 * the same three always give the same number. MurmurHash3 (A. Appleby, public domain), x86 32 bit, over key and the two halves of the place.
 *
 * @param place whole number, |place| < 2⁵³
 */
export function hash32(seed: number, key: number, place: number): number {
  const high = Math.floor(place / 0x1_0000_0000);
  let hash = round(seed | 0, key | 0);
  hash = round(hash, place | 0);
  hash = round(hash, high | 0);
  hash ^= 12;
  hash = Math.imul(hash ^ (hash >>> 16), 0x85ebca6b);
  hash = Math.imul(hash ^ (hash >>> 13), 0xc2b2ae35);
  return (hash ^ (hash >>> 16)) >>> 0;
}

function round(hash: number, word: number): number {
  let k = Math.imul(word, 0xcc9e2d51);
  k = Math.imul((k << 15) | (k >>> 17), 0x1b873593);
  const mixed = hash ^ k;
  return (Math.imul((mixed << 13) | (mixed >>> 19), 5) + 0xe6546b64) | 0;
}

/** Even in [0, 1), by seed, key and place. */
export function uniformAt(seed: number, key: number, place: number): number {
  return hash32(seed, key, place) / 0x1_0000_0000;
}

/** A stream of even 32-bit numbers from one state (xorshift32, Marsaglia 2003). */
export function evenNumbers(state: number): () => number {
  let x = state | 0 || 0x9e3779b9;
  return () => {
    x ^= x << 13;
    x ^= x >>> 17;
    x ^= x << 5;
    return x >>> 0;
  };
}
