import { empiricalQuantile, tQuantile } from "../../limits/index.ts";
import type { Calibration } from "../calibrate.ts";

/** How much one calibration sample weighs and how far it lies off, in the fit and when it is held out. */
export interface SampleInfluence {
  name: string;
  /** 1/n + T²/(n − 1) */
  leverage: number;
  q: { fit: number; crossValidated: number };
  t2: { fit: number; crossValidated: number };
  /** ŷ − y of each property, unit of the property */
  error: { fit: number; crossValidated: number }[];
  /** why a person should look at it; empty for most. Nothing is removed */
  suspicions: Suspicion[];
}

export interface Suspicion {
  kind: "extreme" | "odd spectrum" | "odd relation" | "large error";
  /** how far, in words */
  says: string;
}

/**
 * The figures of the influence plots, and which samples a person should look at:
 * - extreme: leverage above 3(A + 1)/n (ASTM E1655, from memory);
 * - odd spectrum: ln Q when held out lies further above the median than 2.576 standard deviations, taken from the median absolute deviation
 *   (a normal 99.5 % point). Not the limit of Q itself: a far outlier widens that limit until it hides behind it;
 * - odd relation: the spectrum is ordinary and the reference value is within two standard deviations of the mean, but the cross-validated
 *   error is beyond the two-sided 99 % point of t times RMSECV: look at the laboratory's value or a mix-up first;
 * - large error: the same of a sample that is not ordinary.
 */
export function influences(calibration: Calibration): SampleInfluence[] {
  const { model, fit, set, crossValidation } = calibration;
  const { components, properties, samples } = model;
  const n = samples.names.length;
  const { q: qFit } = model.residuals!.fit;
  const { q, t2 } = model.residuals!.crossValidated!;
  const mostQ = robustUpperPoint(q);
  const variances = fit.weights.map((_, a) => fit.scores.reduce((sum, row) => sum + row[a] ** 2, 0) / (n - 1));
  const mostLeverage = (3 * (components + 1)) / n;
  const point = tQuantile(0.995, n - components - 1);
  return samples.names.map((name, i) => {
    const t2Fit = fit.scores[i].reduce((sum, t, a) => sum + (t * t) / variances[a], 0);
    const leverage = 1 / n + t2Fit / (n - 1);
    const error = properties.map(({ mean, deviation }, k) => {
      const fitted = fit.scores[i].reduce((sum, t, a) => sum + t * fit.yLoadings[a][k] * deviation, mean);
      return { fit: fitted - set.y[i][k], crossValidated: crossValidation.predicted[components][i][k] - set.y[i][k] };
    });
    const suspicions: Suspicion[] = [];
    if (leverage > mostLeverage)
      suspicions.push({ kind: "extreme", says: `leverage ${(leverage / mostLeverage).toFixed(1)} × 3(A + 1)/n` });
    if (q[i] > mostQ) {
      suspicions.push({
        kind: "odd spectrum",
        says: `Q ${(q[i] / mostQ).toFixed(1)} × what the other samples let expect, held out`,
      });
    }
    const ordinaryX = suspicions.length === 0;
    properties.forEach(({ name: property, mean, rmsecv }, k) => {
      const times = Math.abs(error[k].crossValidated) / rmsecv![components];
      if (!(times > point)) return;
      const spread = Math.sqrt(set.y.reduce((sum, row) => sum + (row[k] - mean) ** 2, 0) / (n - 1));
      const ordinary = ordinaryX && Math.abs(set.y[i][k] - mean) <= 2 * spread;
      suspicions.push({
        kind: ordinary ? "odd relation" : "large error",
        says: `${property} off by ${times.toFixed(1)} × RMSECV when held out`,
      });
    });
    return {
      name,
      leverage,
      q: { fit: qFit[i], crossValidated: q[i] },
      t2: { fit: t2Fit, crossValidated: t2[i] },
      error,
      suspicions,
    };
  });
}

/** exp(median + 2.576 · 1.4826 · MAD) of the logarithms: 1.4826 makes the median absolute deviation of normal values a standard deviation. */
function robustUpperPoint(values: readonly number[]): number {
  const logarithms = values.map((value) => Math.log(Math.max(value, Number.MIN_VALUE)));
  const centre = empiricalQuantile(logarithms, 0.5);
  const deviation =
    1.4826 *
    empiricalQuantile(
      logarithms.map((value) => Math.abs(value - centre)),
      0.5,
    );
  return Math.exp(centre + 2.576 * deviation);
}
