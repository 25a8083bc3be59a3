import type { Calibration, Diagnostics, InnerRelation } from "../../core/pls/index.ts";
import { Plot } from "./plot.ts";
import { spread } from "./ticks.ts";

/** RMSECV of one property by number of components; the one in the model is filled, the recommended one ringed. */
export function rmsecvPicture({ model, recommendation }: Calibration, property: number): Plot {
  const { name, unit, rmsecv } = model.properties[property];
  const errors = rmsecv!;
  const plot = new Plot({
    says: `RMSECV of ${name} by number of components`,
    x: {
      range: [-0.4, errors.length - 0.6],
      label: "components",
      at: errors.map((_, a) => a).filter((a) => errors.length <= 16 || a % 2 === 0),
    },
    y: { range: [0, 1.06 * Math.max(...errors)], label: `RMSECV${unit && ` / ${unit}`}` },
  });
  plot.line(
    errors.map((error, a) => [a, error]),
    "ink",
  );
  errors.forEach((error, a) => {
    plot.dot([a, error], "ink", a === model.components ? "diamond" : "hollow", `${a}: ${error}`);
  });
  plot.note(
    [model.components, errors[model.components]],
    model.components === recommendation.components ? "in the model, as recommended" : "in the model",
  );
  if (model.components !== recommendation.components)
    plot.note([recommendation.components, errors[recommendation.components]], "recommended");
  return plot;
}

/** Explained variance of X (bars) and of each y (lines), cumulative. */
export function explainedPicture({ explained }: Diagnostics): Plot {
  const A = explained.x.length;
  const plot = new Plot({
    says: "Explained variance of the spectra and of each property, cumulative",
    x: { range: [0.4, A + 0.6], label: "components", at: explained.x.map((_, a) => a + 1) },
    y: { range: [0, 106], label: "explained / %", at: [0, 20, 40, 60, 80, 100] },
  });
  explained.x.forEach((share, a) => {
    plot.bar(a + 1, 0.5, 100 * share, "faint");
  });
  explained.y.forEach(({ name, fit }, k) => {
    plot.line(
      fit.map((share, a) => [a + 1, 100 * share]),
      "ink",
      dashes[k % dashes.length],
    );
    fit.forEach((share, a) => {
      plot.dot([a + 1, 100 * share], "ink", "filled", `${name}, ${a + 1}: ${(100 * share).toFixed(1)} %`);
    });
    plot.name([1, 100 * fit[0]], name);
  });
  return plot;
}

/** Lines are told apart by their dashes, never by colour. */
export const dashes = [undefined, "6 3", "2 3", "8 3 2 3", "1 2"];

/** t against u of one component: hollow in the fit, filled when held out. */
export function innerRelationPicture({ fit, crossValidation }: Calibration, relation: InnerRelation): Plot {
  const a = relation.component - 1;
  const fitted = fit.scores.map((row, i) => [row[a], fit.yScores[i][a]] as const);
  const held = crossValidation.scores.map((row, i) => [row[a], crossValidation.yScores[i][a]] as const);
  const all = [...fitted, ...held];
  const plot = new Plot({
    says: `Inner relation of component ${relation.component}: t against u`,
    width: 400,
    height: 300,
    x: { range: spread(all.map(([t]) => t)), label: `t, component ${relation.component}`, count: 4 },
    y: { range: spread(all.map(([, u]) => u)), label: "u", count: 5 },
  });
  const [low, high] = spread(
    all.map(([t]) => t),
    0,
  );
  plot.line(
    [
      [low, low],
      [high, high],
    ],
    "rule",
  );
  fitted.forEach((point, i) => {
    plot.line([point, held[i]], "faint");
    plot.dot(point, "quiet", "hollow");
  });
  held.forEach((point) => {
    plot.dot(point, "ink");
  });
  return plot;
}
