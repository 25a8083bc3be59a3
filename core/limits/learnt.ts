import { empiricalQuantile } from "./empirical.ts";
import { LimitError } from "./limit-error.ts";

/** Values of one statistic over a reference period: a time in which the process ran as it should, chosen by a person. */
export interface ReferencePeriod {
  /** epoch ms, ascending */
  times: ArrayLike<number>;
  values: ArrayLike<number>;
}

/** How a limit is learnt. */
export interface LearntRule {
  /** share of the blocks whose largest value stays within the limit */
  confidence: number;
  /** length of a block, ms: long against the time over which readings remember each other */
  blockMs: number;
}

/**
 * A limit learnt from a reference period: the quantile of the largest values of blocks of time. Readings that come every few seconds from
 * a slow process are not independent; counting blocks instead of readings keeps thousands of readings of one hour from posing as experience.
 *
 * @returns the limit, in the unit of the values, and how many blocks and readings it rests on
 * @throws LimitError when the period has fewer than 10/(1 − confidence) blocks (too few to know such a quantile), or a value is not finite
 *
 * Source: block maxima, as for extreme values in general (Coles, An Introduction to Statistical Modeling of Extreme Values, 2001, from memory).
 */
export function learntLimit(
  { times, values }: ReferencePeriod,
  { confidence, blockMs }: LearntRule,
): { limit: number; blocks: number; readings: number } {
  const largest = new Map<number, number>();
  for (let i = 0; i < values.length; i++) {
    if (!Number.isFinite(values[i])) {
      throw new LimitError(`value ${i + 1} of the reference period`, {
        got: `${values[i]}`,
        expected: "a finite number",
        todo: "Leave unusable readings out of the period.",
      });
    }
    const block = Math.floor((times[i] - times[0]) / blockMs);
    largest.set(block, Math.max(largest.get(block) ?? Number.NEGATIVE_INFINITY, values[i]));
  }
  const needed = Math.ceil(10 / (1 - confidence) - 1e-9);
  if (largest.size < needed) {
    throw new LimitError("the reference period", {
      got: `${largest.size} blocks of ${blockMs / 60_000} min with readings in them`,
      expected: `at least ${needed} to know the ${confidence * 100} % point`,
      todo: "Choose a longer period, shorter blocks or a lower confidence.",
    });
  }
  const limit = empiricalQuantile(Array.from(largest.values()), confidence);
  return { limit, blocks: largest.size, readings: values.length };
}
