import { tQuantile } from "../limits/index.ts";
import type { OddPair } from "../messages/index.ts";
import { biasTest } from "./bias-test.ts";

/** Below this a test for outliers tells nothing that a look would not. */
const leastPairs = 6;

/**
 * The error that lies furthest from the mean, when that is further than chance allows at 1 % (two-sided). It is shown and stays in the
 * statistics: only a person who knows why takes a result out, with a reason.
 *
 * Source: Grubbs, Technometrics 11 (1969) 1. Checked against R and published critical values: test/reference/lab-agreement.test.ts.
 */
export function oddPair(errors: readonly number[], alpha = 0.01): OddPair | undefined {
  if (errors.length < leastPairs) return undefined;
  const { index, g } = furthest(errors);
  const critical = grubbsCritical(errors.length, alpha);
  return g > critical ? { index, g, critical } : undefined;
}

/** G = max|e − mean|/s; 0 when the errors do not vary. */
export function furthest(errors: readonly number[]): { index: number; g: number } {
  const { bias, sep } = biasTest(errors);
  const away = errors.map((e) => Math.abs(e - bias));
  const index = away.indexOf(Math.max(...away));
  return { index, g: sep > 0 ? away[index] / sep : 0 };
}

/** ((n − 1)/√n) √(t²/(n − 2 + t²)), t the upper α/2n point with n − 2 degrees of freedom. */
export function grubbsCritical(n: number, alpha: number): number {
  const t2 = tQuantile(1 - alpha / (2 * n), n - 2) ** 2;
  return ((n - 1) / Math.sqrt(n)) * Math.sqrt(t2 / (n - 2 + t2));
}
