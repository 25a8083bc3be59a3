import type { DriftingWatch } from "../limit-set/index.ts";
import type { Condition } from "./detector.ts";

/** The memory of one drift detector. Plain data; kept in the store. */
export interface Drift {
  /** the first and the newest reading of this stretch without a gap; process time, epoch ms */
  since: number;
  at: number;
  readings: number;
  /** ln(Q ratio), smoothed once and twice */
  once: number;
  twice: number;
}

/** Where Q is, and where it is going. */
export interface Outlook {
  /** the Q ratio without its noise */
  ratio: number;
  /** process time until it reaches 1, if it goes on as it does, ms; infinite when it does not rise, 0 when it is there */
  untilLimitMs: number;
}

/** A Q of nothing at all has no logarithm; what lies below this is nothing. */
const leastRatio = 1e-6;
/** Time constants until the averages tell of the process, and no more of how they were begun. */
const settledAfter = 2;

/**
 * One more reading into an exponentially weighted moving average of y = ln(Q / limit), and into one of that average (double exponential
 * smoothing; Brown, Smoothing, Forecasting and Prediction, 1963, from memory), for readings at uneven times:
 *
 *     w = max(1 − exp(−Δt/τ), 1/n)     s₁ ← s₁ + w (y − s₁)     s₂ ← s₂ + w (s₁ − s₂)
 *
 * The logarithm, because Q of a growing film grows by a factor in a time. A reading beyond the limit counts as one at the limit: what is
 * unfamiliar already needs no forecast, and a bubble must not look like a trend. At first, with n readings, the averages are plain means:
 * begun with a single reading they would carry its noise for long.
 *
 * @param ratio Q divided by its limit
 * @param timeConstantMs τ
 */
export function followDrift(drift: Drift | undefined, ratio: number, at: number, timeConstantMs: number): Drift {
  const y = Math.min(0, Math.log(Math.max(ratio, leastRatio)));
  if (!drift) return { since: at, at, readings: 1, once: y, twice: y };
  const readings = drift.readings + 1;
  const w = Math.max(1 - Math.exp(-(at - drift.at) / timeConstantMs), 1 / readings);
  const once = drift.once + w * (y - drift.once);
  return { since: drift.since, at, readings, once, twice: drift.twice + w * (once - drift.twice) };
}

/** level = 2 s₁ − s₂, slope = (s₁ − s₂)/τ (of a straight line each average lags by τ); the limit is at ln 1 = 0. */
export function outlookOf({ once, twice }: Drift, timeConstantMs: number): Outlook {
  const level = 2 * once - twice;
  const slope = (once - twice) / timeConstantMs;
  const untilLimitMs = level >= 0 ? 0 : slope > 0 ? -level / slope : Number.POSITIVE_INFINITY;
  return { ratio: Math.exp(level), untilLimitMs };
}

/** What a drift says about the alarm that watches it. */
export function driftCondition(drift: Drift | undefined, ratio: number | null, watch: DriftingWatch): Condition {
  const timeConstantMs = watch.timeConstantMinutes * 60_000;
  if (!drift || ratio === null || drift.at - drift.since < settledAfter * timeConstantMs) return "none";
  if (ratio > 1) return "between"; // it has arrived: from here on it is unfamiliar, and no forecast
  // The cause has gone at once (somebody cleaned the window), and the averages have not heard of it yet.
  if (ratio < watch.fromRatio / 2) return "clear";
  const within = watch.withinMinutes * 60_000;
  const { ratio: smoothed, untilLimitMs } = outlookOf(drift, timeConstantMs);
  if (untilLimitMs <= within && smoothed >= watch.fromRatio) return "beyond";
  return untilLimitMs > within * (1 + watch.deadband) ? "clear" : "between";
}
