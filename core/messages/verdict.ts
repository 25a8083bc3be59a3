import { type Static, Type } from "typebox";

/**
 * What may be believed of a reading, worst first. Several may hold at once; the first of them in this order is shown first.
 *
 * unusable      not a valid spectrum: no number is given
 * unfamiliar    Q beyond its limit: something in the spectrum that the calibration never saw
 * extrapolated  T² beyond its limit: known ingredients, amounts outside the calibration
 * sparse        no calibration sample near it
 * inside        none of these
 */
export const verdicts = ["unusable", "unfamiliar", "extrapolated", "sparse", "inside"] as const;
export const VerdictSchema = Type.Enum(verdicts);
export type Verdict = (typeof verdicts)[number];

const bits: Record<Verdict, number> = {
  inside: 1,
  sparse: 2,
  extrapolated: 4,
  unfamiliar: 8,
  unusable: 16,
};

/** The verdicts of one reading (or of all readings in one interval) as a bit mask: inside 1, sparse 2, extrapolated 4, unfamiliar 8, unusable 16. */
export function verdictMask(held: readonly Verdict[]): number {
  return held.reduce((mask, word) => mask | bits[word], 0);
}

/** The verdicts in a mask, worst first. */
export function verdictsOfMask(mask: number): Verdict[] {
  return verdicts.filter((word) => (mask & bits[word]) !== 0);
}

/** The worst verdict in a mask; undefined for an empty one. */
export function worstOfMask(mask: number): Verdict | undefined {
  return verdicts.find((word) => (mask & bits[word]) !== 0);
}

/** True when a reading's mask says inside (it then says nothing else), or when one of the readings behind a mask was. */
export function isInside(mask: number): boolean {
  return (mask & bits.inside) !== 0;
}

/** True when every reading behind the mask was inside. */
export function onlyInside(mask: number): boolean {
  return mask === bits.inside;
}

export type VerdictList = Static<typeof VerdictSchema>[];
