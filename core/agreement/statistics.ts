import { chiSquaredQuantile, fUpperTail, normalQuantile, tQuantile, tTails } from "../limits/index.ts";
import type { AgreementStatistics, Estimate, Test } from "../messages/index.ts";
import { biasTest } from "./bias-test.ts";
import { type Line, lineThrough } from "./line.ts";

/** What the model's own cross-validation promised. */
export interface Promised {
  /** √(PRESS/n), unit of the property */
  rmsecv: number;
  /** n − A − 1 of the calibration */
  freedom: number;
}

/** of every interval, two-sided */
const confidence = 0.95;
const upper = 1 - (1 - confidence) / 2;

/**
 * Predictions against the laboratory, over n ≥ 3 pairs in the unit of the property; e = predicted − laboratory.
 *
 *     RMSEP = √(Σe²/n)                     interval: √(Σe²/χ²(n)), right where there is no bias
 *     bias  = Σe/n                         ± t(n − 1) SEP/√n
 *     SEP   = √(Σ(e − bias)²/(n − 1))      interval: SEP √((n − 1)/χ²(n − 1))
 *     laboratory = intercept + slope · predicted      ± t(n − 2) · standard error
 *     R²    = squared correlation          interval: Fisher's z = artanh r, ± 1.96/√(n − 3)
 *
 * SEP holds the laboratory's own error and that of sampling in time: no model can show a smaller one.
 *
 * Source: ISO 12099 for bias, SEP, slope and their tests, the F test of SEP with n − 1 and n_cal − A − 1 degrees of freedom (from memory;
 * there against SEC, here against RMSECV, which is the honest one of a model with many components). Checked against R:
 * test/reference/lab-agreement.test.ts.
 */
export function agreementStatistics(
  predicted: readonly number[],
  laboratory: readonly number[],
  promised: Promised | undefined,
): AgreementStatistics {
  const errors = predicted.map((value, i) => value - laboratory[i]);
  const n = errors.length;
  const { bias, sep, statistic, freedom, p } = biasTest(errors);
  const line = lineThrough(predicted, laboratory);
  return {
    n,
    rmsep: spread(
      errors.reduce((sum, e) => sum + e * e, 0),
      n,
    ),
    bias: around(bias, sep / Math.sqrt(n), n - 1),
    sep: spread(sep ** 2 * (n - 1), n - 1),
    slope: line ? around(line.slope, line.slopeError, line.freedom) : null,
    intercept: line ? around(line.intercept, line.interceptError, line.freedom) : null,
    r2: line ? squaredCorrelation(line, n) : null,
    biasTest: { statistic, freedom, p },
    sepTest: promised ? sepTest(sep, n, promised) : null,
    slopeTest: line ? slopeTest(line) : null,
  };
}

/** Is the scatter larger than promised? One-sided: a smaller one is no fault. */
export function sepTest(sep: number, n: number, { rmsecv, freedom }: Promised): Test {
  const f = (sep / rmsecv) ** 2;
  return { statistic: f, freedom: [n - 1, freedom], p: fUpperTail(f, n - 1, freedom) };
}

function slopeTest({ slope, slopeError, freedom }: Line): Test {
  if (!(slopeError > 0)) return { statistic: null, freedom: [freedom], p: slope === 1 ? 1 : 0 };
  const t = (slope - 1) / slopeError;
  return { statistic: t, freedom: [freedom], p: tTails(t, freedom) };
}

function around(value: number, error: number, freedom: number): Estimate {
  const half = tQuantile(upper, freedom) * error;
  return { value, low: value - half, high: value + half };
}

/** √(sum/freedom), and where it may lie when the errors are normal. */
function spread(sum: number, freedom: number): Estimate {
  const end = (share: number) => Math.sqrt(sum / chiSquaredQuantile(share, freedom));
  return { value: Math.sqrt(sum / freedom), low: end(upper), high: end(1 - upper) };
}

function squaredCorrelation({ r2, slope }: Line, n: number): Estimate {
  const z = Math.atanh(Math.sqrt(r2)); // r without its sign; a line that falls is no agreement, and its slope says so
  if (n < 4 || !Number.isFinite(z) || slope < 0) return { value: r2, low: null, high: null };
  const half = normalQuantile(upper) / Math.sqrt(n - 3);
  return { value: r2, low: Math.tanh(Math.max(0, z - half)) ** 2, high: Math.tanh(z + half) ** 2 };
}
