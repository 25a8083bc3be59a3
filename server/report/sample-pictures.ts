import { t2LimitF } from "../../core/limits/index.ts";
import type { Calibration, Diagnostics } from "../../core/pls/index.ts";
import { lookOfSample } from "./look-of-sample.ts";
import { type Look, Plot } from "./plot.ts";
import { spread } from "./ticks.ts";

/** Scores of components a and b, with the ellipse within which T² of those two stays below its limit for new readings. */
export function scorePicture(
  { fit, set, model }: Calibration,
  [a, b]: readonly [number, number],
  looks: ReadonlyMap<string, Look>,
  confidence: number,
): Plot {
  const n = fit.scores.length;
  const deviation = (k: number) => Math.sqrt(fit.scores.reduce((sum, row) => sum + row[k] ** 2, 0) / (n - 1));
  const radius = Math.sqrt(t2LimitF({ n, components: 2, confidence }));
  const ellipse = Array.from({ length: 97 }, (_, i) => {
    const angle = (2 * Math.PI * i) / 96;
    return [radius * deviation(a) * Math.cos(angle), radius * deviation(b) * Math.sin(angle)] as const;
  });
  const points = fit.scores.map((row) => [row[a], row[b]] as const);
  const plot = new Plot({
    says: `Score map of components ${a + 1} and ${b + 1}`,
    height: 400,
    x: { range: spread([...points, ...ellipse].map(([x]) => x)), label: `t, component ${a + 1}` },
    y: { range: spread([...points, ...ellipse].map(([, y]) => y)), label: `t, component ${b + 1}` },
  });
  plot.line(ellipse, "rule", "5 3");
  const names = set.spectra.names;
  points.forEach((point, i) => {
    plot.dot(point, looks.get(names[i]) ?? "ink", "filled", model.samples.names[i]);
    if (looks.has(names[i])) plot.name(point, names[i]);
  });
  return plot;
}

/** T² against Q, each over its limit, on log scales: hollow in the fit, filled when held out. */
export function influencePicture({ samples }: Diagnostics, limits: { t2: number; q: number }): Plot {
  const fitted = samples.map(({ t2, q }) => [t2.fit / limits.t2, q.fit / limits.q] as const);
  const held = samples.map(({ t2, q }) => [t2.crossValidated / limits.t2, q.crossValidated / limits.q] as const);
  const logRange = (values: number[]): [number, number] => {
    const positive = values.filter((value) => value > 0);
    return [Math.min(0.5, 0.8 * Math.min(...positive)), Math.max(2, 1.25 * Math.max(...positive))];
  };
  const plot = new Plot({
    says: "Influence of the samples: T² against Q, over their limits",
    height: 400,
    x: { range: logRange([...fitted, ...held].map(([x]) => Math.max(x, 0.01))), label: "T² / limit", log: true },
    y: { range: logRange([...fitted, ...held].map(([, y]) => Math.max(y, 0.01))), label: "Q / limit", log: true },
  });
  plot.level(1, "Q limit").upright(1, "T² limit");
  fitted.forEach((point, i) => {
    plot.line([point, held[i]], "faint");
    plot.dot(point, "quiet", "hollow");
  });
  samples.forEach((sample, i) => {
    const { name } = sample;
    const look = lookOfSample(sample);
    plot.dot(held[i], look, "filled", name);
    if (look !== "ink") plot.name(held[i], name);
  });
  return plot;
}

/** Leverage against the error of one property: hollow in the fit, filled when held out. */
export function leverageErrorPicture({ model }: Calibration, { samples }: Diagnostics, property: number): Plot {
  const { name, unit, rmsecv } = model.properties[property];
  const errors = samples.flatMap(({ error }) => [error[property].fit, error[property].crossValidated]);
  const mostLeverage = (3 * (model.components + 1)) / samples.length;
  const spreadOfError = 2 * rmsecv![model.components];
  const plot = new Plot({
    says: `Leverage of the samples against their error in ${name}`,
    height: 400,
    x: { range: [0, 1.08 * Math.max(mostLeverage, ...samples.map(({ leverage }) => leverage))], label: "leverage" },
    y: {
      range: spread([...errors, spreadOfError, -spreadOfError], 0.1),
      label: `predicted − reference ${name}${unit && ` / ${unit}`}`,
    },
  });
  plot.level(0, "").upright(mostLeverage, "3(A + 1)/n");
  plot.level(spreadOfError, "+2 RMSECV", "faint").level(-spreadOfError, "−2 RMSECV", "faint");
  for (const sample of samples) {
    const { name: title, leverage, error } = sample;
    const look = lookOfSample(sample);
    const { fit, crossValidated } = error[property];
    plot.line(
      [
        [leverage, fit],
        [leverage, crossValidated],
      ],
      "faint",
    );
    plot.dot([leverage, fit], "quiet", "hollow");
    plot.dot([leverage, crossValidated], look, "filled", title);
    if (look !== "ink") plot.name([leverage, crossValidated], title);
  }
  return plot;
}

/** Samples and channels in one picture: scores as dots, loadings as a line through the channels, each over its own largest. */
export function biplotPicture({ fit }: Calibration, [a, b]: readonly [number, number], axisPoints: Float64Array): Plot {
  const most = (values: number[]) => Math.max(...values.map(Math.abs)) || 1;
  const scores = [a, b].map((k) => fit.scores.map((row) => row[k]));
  const loadings = [a, b].map((k) => Array.from(fit.loadings[k]));
  const over = (values: number[]) => values.map((value) => value / most(values));
  const [sx, sy, lx, ly] = [over(scores[0]), over(scores[1]), over(loadings[0]), over(loadings[1])];
  const plot = new Plot({
    says: `Biplot of components ${a + 1} and ${b + 1}`,
    height: 400,
    x: { range: [-1.1, 1.1], label: `component ${a + 1}, each over its largest` },
    y: { range: [-1.1, 1.1], label: `component ${b + 1}` },
  });
  plot.level(0, "").upright(0, "");
  plot.line(
    lx.map((x, j) => [x, ly[j]]),
    "quiet",
  );
  const far = lx.map((x, j) => ({ j, size: Math.hypot(x, ly[j]) })).sort((one, other) => other.size - one.size);
  const named: number[] = [];
  for (const { j, size } of far) {
    if (named.length >= 8 || size < 0.35) break;
    if (named.some((k) => Math.abs(k - j) < lx.length / 25)) continue;
    named.push(j);
    plot.dot([lx[j], ly[j]], "quiet", "hollow").name([lx[j], ly[j]], String(axisPoints[j]));
  }
  sx.forEach((x, i) => {
    plot.dot([x, sy[i]], "ink");
  });
  return plot;
}
