import { tQuantile } from "../limits/index.ts";
import type { Model, ModelProperty } from "../model/index.ts";

/**
 * The uncertainty of a prediction, as the half width of an interval for one new reference value, is this factor times √(1 + h):
 *
 *     t(1 − α/2; n − A − 1) · SEC · √(1 + h)        h = 1/n + tᵀ(TᵀT)⁻¹t, the leverage of the new spectrum
 *
 * SEC = √(Σe²/(n − A − 1)) over the calibration samples. It grows with leverage, but inside the calibration only little (h = 0.25: 1.12), and
 * it knows nothing of Q: it is no outlier test, and for a reading that is not inside none is defensible. SEC holds the laboratory's own error.
 *
 * @returns NaN when the model does not say SEC or has no degree of freedom left
 *
 * Source: the form of ASTM E1655 (from memory). Checked against R: test/reference/gasoline-monitoring.test.ts.
 */
export function uncertaintyFactor({ sec }: ModelProperty, model: Model, confidence: number): number {
  const freedom = model.samples.names.length - model.components - 1;
  if (sec === undefined || freedom < 1) return Number.NaN;
  return tQuantile(1 - (1 - confidence) / 2, freedom) * sec;
}
