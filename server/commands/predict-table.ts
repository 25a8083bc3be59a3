import type { Model } from "../../core/model/index.ts";
import { compileModel, newScore, scoreInto } from "../../core/pls/index.ts";
import { resampler, type Spectra, sameAxis } from "../../core/spectrum/index.ts";

/** ŷ of each spectrum, brought to the model's axis: n × properties. @throws AxisError when the axis does not cover the model's */
export function predictTable(model: Model, { axis, rows }: Spectra): number[][] {
  const compiled = compileModel(model);
  const score = newScore(compiled);
  const onAxis = new Float64Array(compiled.channels);
  const bring = sameAxis(axis, compiled.axis) ? undefined : resampler(axis, compiled.axis);
  return rows.map((row) => {
    bring?.(row, onAxis);
    scoreInto(bring ? onAxis : row, compiled, score);
    return Array.from(score.values);
  });
}
