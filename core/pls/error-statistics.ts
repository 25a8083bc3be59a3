/** How predictions compare with reference values; e = ŷ − y. Units: that of the property, but for slope, R² and RPD. */
export interface ErrorStatistics {
  n: number;
  /** √(Σe²/n): RMSEC, RMSECV or RMSEP, by which predictions they are */
  rms: number;
  /** mean of e */
  bias: number;
  /** √(Σ(e − bias)²/(n − 1)), corrected for bias. rms² = bias² + sep² (n − 1)/n. Undefined for one sample */
  sep: number | undefined;
  /** of the straight line reference = intercept + slope · predicted; undefined when the predictions do not vary */
  slope: number | undefined;
  intercept: number | undefined;
  /** 1 − Σe² / Σ(y − ȳ)²; undefined when the reference does not vary */
  r2: number | undefined;
  /** standard deviation of the reference (n − 1) divided by sep: depends on the spread of the set, so look at sep first */
  rpd: number | undefined;
}

/**
 * Source: ISO 12099 for bias, SEP and the slope of reference on predicted (from memory). Some texts call √(Σe²/n) SEP: here it never is.
 */
export function errorStatistics(predicted: ArrayLike<number>, reference: ArrayLike<number>): ErrorStatistics {
  const n = predicted.length;
  let bias = 0;
  let meanPredicted = 0;
  let meanReference = 0;
  for (let i = 0; i < n; i++) {
    bias += (predicted[i] - reference[i]) / n;
    meanPredicted += predicted[i] / n;
    meanReference += reference[i] / n;
  }
  let ee = 0;
  let aroundBias = 0;
  let pp = 0;
  let pr = 0;
  let rr = 0;
  for (let i = 0; i < n; i++) {
    const e = predicted[i] - reference[i];
    ee += e * e;
    aroundBias += (e - bias) ** 2;
    pp += (predicted[i] - meanPredicted) ** 2;
    pr += (predicted[i] - meanPredicted) * (reference[i] - meanReference);
    rr += (reference[i] - meanReference) ** 2;
  }
  const sep = n > 1 ? Math.sqrt(aroundBias / (n - 1)) : undefined;
  const slope = pp > 0 ? pr / pp : undefined;
  return {
    n,
    rms: Math.sqrt(ee / n),
    bias,
    sep,
    slope,
    intercept: slope === undefined ? undefined : meanReference - slope * meanPredicted,
    r2: rr > 0 ? 1 - ee / rr : undefined,
    rpd: sep && rr > 0 ? Math.sqrt(rr / (n - 1)) / sep : undefined,
  };
}
