import type { Calibration } from "../../core/pls/index.ts";
import { type Look, Plot } from "./plot.ts";
import { spread } from "./ticks.ts";

/** Samples that were not used to calibrate, with their predictions: n × properties; NaN where there is no reference value. */
export interface TestSet {
  file: string;
  names: readonly string[];
  y: readonly ArrayLike<number>[];
  predicted: readonly ArrayLike<number>[];
}

/** Predicted against reference: hollow in the fit, filled when held out, diamonds for test samples; the names of odd samples beside them. */
export function predictionPicture(
  calibration: Calibration,
  property: number,
  looks: ReadonlyMap<string, Look>,
  test?: TestSet,
): Plot {
  const { model, set } = calibration;
  const { name, unit } = model.properties[property];
  const { reference, fitted, held, tested } = valuesOf(calibration, property, test);
  const range = spread([...reference, ...fitted, ...held, ...tested.flat()]);
  const of = unit && ` / ${unit}`;
  const plot = new Plot({
    says: `Predicted against reference ${name}`,
    height: 400,
    x: { range, label: `reference ${name}${of}` },
    y: { range, label: `predicted ${name}${of}` },
  });
  plot.line(
    [
      [range[0], range[0]],
      [range[1], range[1]],
    ],
    "rule",
  );
  reference.forEach((y, i) => {
    plot.line(
      [
        [y, fitted[i]],
        [y, held[i]],
      ],
      "faint",
    );
    plot.dot([y, fitted[i]], "quiet", "hollow");
  });
  reference.forEach((y, i) => {
    const sample = set.spectra.names[i];
    plot.dot([y, held[i]], looks.get(sample) ?? "ink", "filled", sample);
    if (looks.has(sample)) plot.name([y, held[i]], sample);
  });
  tested.forEach(([y, predicted], i) => {
    if (Number.isFinite(y)) plot.dot([y, predicted], "ink", "hollow diamond", test!.names[i]);
  });
  return plot;
}

/** What is left, over the reference value, with the same marks. */
export function errorPicture(
  calibration: Calibration,
  property: number,
  looks: ReadonlyMap<string, Look>,
  test?: TestSet,
): Plot {
  const { model, set } = calibration;
  const { name, unit } = model.properties[property];
  const { reference, fitted, held, tested } = valuesOf(calibration, property, test);
  const errors = [...fitted, ...held].map((value, i) => value - reference[i % reference.length]);
  const of = unit && ` / ${unit}`;
  const plot = new Plot({
    says: `Error of prediction over the reference ${name}`,
    height: 400,
    x: { range: spread([...reference, ...tested.map(([y]) => y)]), label: `reference ${name}${of}` },
    y: {
      range: spread([...errors, ...tested.map(([y, value]) => value - y)], 0.1),
      label: `predicted − reference${of}`,
    },
  });
  plot.level(0, "");
  reference.forEach((y, i) => {
    plot.line(
      [
        [y, fitted[i] - y],
        [y, held[i] - y],
      ],
      "faint",
    );
    plot.dot([y, fitted[i] - y], "quiet", "hollow");
  });
  reference.forEach((y, i) => {
    const sample = set.spectra.names[i];
    plot.dot([y, held[i] - y], looks.get(sample) ?? "ink", "filled", sample);
    if (looks.has(sample)) plot.name([y, held[i] - y], sample);
  });
  tested.forEach(([y, value], i) => {
    if (Number.isFinite(y)) plot.dot([y, value - y], "ink", "hollow diamond", test!.names[i]);
  });
  return plot;
}

function valuesOf({ model, set, fit, crossValidation }: Calibration, property: number, test?: TestSet) {
  const { mean, deviation } = model.properties[property];
  return {
    reference: set.y.map((row) => row[property]),
    fitted: fit.scores.map((row) => row.reduce((sum, t, a) => sum + t * fit.yLoadings[a][property] * deviation, mean)),
    held: crossValidation.predicted[model.components].map((row) => row[property]),
    tested: (test?.names ?? []).map((_, i) => [test!.y[i][property], test!.predicted[i][property]] as const),
  };
}
