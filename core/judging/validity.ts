import type { Quality } from "../messages/index.ts";

/** Why a spectrum cannot be used, and the sentence that says so. */
export interface Invalid {
  reason: "bad quality" | "wrong length" | "not finite" | "saturated" | "flat" | "frozen";
  says: string;
}

export interface ValidityRules {
  /** values at or above it are saturated, unit of the spectrum; without it only a plateau at the top tells */
  ceiling?: number;
  /** the same spectrum this many times in a row is frozen */
  frozenAfter: number;
}

/** A plateau at the very top: that share of the channels, and no fewer than this, with exactly the largest value. */
const plateauShare = 0.02;
const plateauLeast = 5;

/**
 * Is this a spectrum at all? Looks at it as it was received. `expected` is the number of values that its axis has; `same` counts how often
 * in a row exactly this spectrum came. Returns undefined for a valid one.
 */
export function invalidity(
  values: Float64Array,
  expected: number,
  quality: Quality | undefined,
  same: number,
  rules: ValidityRules,
): Invalid | undefined {
  if (quality === "bad")
    return {
      reason: "bad quality",
      says: "the analyzer itself marks this reading as bad",
    };
  if (values.length !== expected) {
    return {
      reason: "wrong length",
      says: `${values.length} values, expected ${expected}, one for each point of the axis`,
    };
  }
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let j = 0; j < values.length; j++) {
    const value = values[j];
    if (!Number.isFinite(value))
      return {
        reason: "not finite",
        says: `value ${j} is ${value}, expected a finite number`,
      };
    if (value < low) low = value;
    if (value > high) high = value;
  }
  if (high === low) return { reason: "flat", says: `all ${values.length} values are ${high}` };
  const saturated = saturatedChannels(values, high, rules.ceiling);
  if (saturated >= Math.max(plateauLeast, plateauShare * values.length)) {
    const level =
      rules.ceiling !== undefined && high >= rules.ceiling
        ? `at or above ${rules.ceiling}`
        : `at the same top value, ${high}`;
    return {
      reason: "saturated",
      says: `${saturated} of ${values.length} channels are ${level}`,
    };
  }
  if (same >= rules.frozenAfter) {
    return {
      reason: "frozen",
      says: `exactly the same spectrum ${same} times in a row`,
    };
  }
  return undefined;
}

function saturatedChannels(values: Float64Array, high: number, ceiling = high): number {
  const level = Math.min(ceiling, high);
  let count = 0;
  for (let j = 0; j < values.length; j++) if (values[j] >= level) count++;
  return count;
}

/** A short fingerprint of a spectrum's exact bits (two FNV-1a hashes over its 32-bit words): tells a repeated one, nothing more. */
export function fingerprint(values: Float64Array): string {
  const words = new Uint32Array(values.buffer, values.byteOffset, values.length * 2);
  let a = 0x811c9dc5;
  let b = 0x9747b28c;
  for (let i = 0; i < words.length; i++) {
    a = Math.imul(a ^ words[i], 0x01000193);
    b = Math.imul(b ^ ((words[i] << 16) | (words[i] >>> 16)), 0x01000193);
  }
  return (a >>> 0).toString(16) + (b >>> 0).toString(16);
}
