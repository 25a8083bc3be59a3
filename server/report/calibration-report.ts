import type { StatisticChoice } from "../../core/limits/index.ts";
import {
  boxLimit,
  boxMomentsLimit,
  empiricalQuantile,
  jacksonMudholkarLimit,
  LimitError,
  t2Limit,
} from "../../core/limits/index.ts";
import { type Model, modelId } from "../../core/model/index.ts";
import {
  type Calibration,
  type Diagnostics,
  type ErrorStatistics,
  errorStatistics,
  type InnerRelation,
} from "../../core/pls/index.ts";
import { axisAfterSteps, axisFromSpec, describeAxis, writeSteps } from "../../core/spectrum/index.ts";
import { figure as plainFigure } from "../commands/figures.ts";
import { bandPicture, coefficientPicture, curvePicture, vipPicture } from "./channel-pictures.ts";
import { explainedPicture, innerRelationPicture, rmsecvPicture } from "./component-pictures.ts";
import { lookOfSample } from "./look-of-sample.ts";
import { escapeText, type Look, type Plot } from "./plot.ts";
import { errorPicture, predictionPicture, type TestSet } from "./prediction-picture.ts";
import { biplotPicture, influencePicture, leverageErrorPicture, scorePicture } from "./sample-pictures.ts";
import { reportStyle } from "./style.ts";

export interface ReportInput {
  calibration: Calibration;
  /** as it was written: with RMSEP where there is a test set */
  model: Model;
  diagnostics: Diagnostics;
  choice: StatisticChoice;
  limits: { t2: number; q: number; nearest: number };
  confidence: number;
  warnings: readonly string[];
  test?: TestSet;
}

/** The report of a calibration as one HTML page that needs nothing else: pictures, figures with their formulas, what to mind, and the record. */
export function calibrationReport(input: ReportInput): string {
  const { model } = input;
  return `<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width,initial-scale=1">
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'; font-src data:; img-src data:">
<title>${escapeText(model.name)}: calibration report</title><style>${reportStyle()}</style></head>
<body><main>
${head(input)}
${errors(input)}
${components(input)}
${samples(input)}
${channels(input)}
${limits(input)}
${everySample(input)}
${record(input)}
</main></body></html>
`;
}

function head({ model, warnings, calibration }: ReportInput): string {
  const { samples, components, properties } = model;
  const best = properties
    .map(({ name, unit, rmsecv }) => `${name} to ±${figure(rmsecv![components], 2)}${unit && ` ${unit}`}`)
    .join(", ");
  return `<h1>${escapeText(model.name)}</h1>
<p class="quiet">Calibration report · ${model.created.replace("T", " ").replace(/\.\d+Z$/, " UTC")} · model ${modelId(model).slice(0, 12)}</p>
<p class="lead">${samples.names.length} samples, ${model.components} component${components === 1 ? "" : "s"}. Held-out samples are predicted with a typical error (RMSECV) of: ${escapeText(best)}.</p>
<p>The one-standard-error rule recommends ${calibration.recommendation.components}: ${escapeText(calibration.recommendation.says)}.${
    calibration.recommendation.components === components ? "" : ` The model has ${components}, as it was asked for.`
  }</p>
${warnings.map((warning) => `<p class="mind"><b>Mind:</b> ${escapeText(warning)}</p>`).join("\n")}`;
}

function errors({ calibration, diagnostics, test, model }: ReportInput): string {
  const looks = looksOf(diagnostics);
  const rows = model.properties.flatMap(({ name, unit }, k) => {
    const { fit, crossValidated } = diagnostics.errors[k];
    const tested = test && testStatistics(test, k);
    return [
      errorRow(`${name}, fit (RMSEC)`, fit, unit),
      errorRow(`${name}, held out (RMSECV)`, crossValidated, unit),
      ...(tested ? [errorRow(`${name}, test (RMSEP)`, tested, unit)] : []),
    ];
  });
  return `<h2>How well it predicts</h2>
<p>The fit flatters; the held-out line is what to expect of new samples of the same kind${test ? `, and the test line what samples gave that had no part in the calibration (${escapeText(test.file)})` : ""}.</p>
${table(["", "n", "RMS", "bias", "SEP", "slope", "R²", "RPD"], rows)}
<p class="quiet">e = predicted − reference. RMS = √(Σe²/n): RMSEC, RMSECV or RMSEP · bias = mean of e · SEP = √(Σ(e − bias)²/(n − 1)), so RMS² = bias² + SEP²(n − 1)/n · slope of reference on predicted · R² = 1 − Σe²/Σ(y − ȳ)² · RPD = standard deviation of the reference / SEP: it depends on the spread of the set, so look at SEP first.${
    model.properties.some(({ sec }) => sec !== undefined)
      ? ` SEC of ASTM E1655, √(Σe²/(n − A − 1)): ${escapeText(model.properties.map(({ name, sec, unit }) => `${name} ${figure(sec)}${unit && ` ${unit}`}`).join(", "))}.`
      : ""
  }</p>
<div class="cards">${model.properties
    .map(
      ({ name }, k) =>
        card(
          `Predicted against reference: ${name}`,
          predictionPicture(calibration, k, looks, test),
          `Hollow: in the fit. Filled: held out; a line joins the two. ${test ? "Diamonds: test samples. " : ""}Named: samples to look at. On the diagonal predicted equals reference.`,
        ) +
        card(
          `Error over the range: ${name}`,
          errorPicture(calibration, k, looks, test),
          "A bend or a slope tells of a property that is not linear in the spectra; a fan, of an error that grows with the value.",
        ),
    )
    .join("")}</div>`;
}

function errorRow(name: string, { n, rms, bias, sep, slope, r2, rpd }: ErrorStatistics, unit: string): string[] {
  const of = (value: number | undefined) => figure(value) + (unit && value !== undefined ? ` ${unit}` : "");
  const rounding = Math.abs(bias) < 1e-9 * rms; // the fit has none by construction
  return [name, String(n), of(rms), of(rounding ? 0 : bias), of(sep), figure(slope), figure(r2), figure(rpd, 3)];
}

function testStatistics({ y, predicted }: TestSet, k: number): ErrorStatistics | undefined {
  const known = y.map((_, i) => i).filter((i) => Number.isFinite(y[i][k]));
  if (known.length === 0) return undefined;
  return errorStatistics(
    known.map((i) => predicted[i][k]),
    known.map((i) => y[i][k]),
  );
}

function components({ calibration, diagnostics, model }: ReportInput): string {
  return `<h2>How many components</h2>
<p>Too few leave out what is known; too many describe noise. The error of held-out samples shows where to stop: the fewest components that are not clearly worse than the best.</p>
<div class="cards">${model.properties
    .map(({ name }, k) =>
      card(
        `Error of held-out samples: ${name}`,
        rmsecvPicture(calibration, k),
        "With 0 components every sample is predicted as the mean.",
      ),
    )
    .join("")}
${card("Explained variance", explainedPicture(diagnostics), "Bars: of the spectra. Lines: of each property, in the fit. Cumulative.")}
${diagnostics.innerRelations.map((relation) => card(`Inner relation of component ${relation.component}`, innerRelationPicture(calibration, relation), relationInWords(relation))).join("")}</div>`;
}

function relationInWords({
  correlation,
  crossValidated,
  leastCorrelation,
  empty,
  curvature,
  curvatureLimit,
  bent,
}: InnerRelation): string {
  const relation = empty
    ? `<b>No relation when held out</b> (r = ${figure(crossValidated, 2)}, at least ${figure(leastCorrelation, 2)} would be needed): the component is not worth taking.`
    : `Holds when held out: r = ${figure(crossValidated, 2)} (in the fit ${figure(correlation, 2)}).`;
  const shape = bent
    ? `<b>The relation bends</b> (t of the quadratic term ${figure(curvature, 2)}, limit ±${figure(curvatureLimit, 2)}): the property is not linear in the spectra as they are preprocessed.`
    : `No bend (t of the quadratic term ${figure(curvature, 2)}, limit ±${figure(curvatureLimit, 2)}).`;
  return `${relation} ${shape} Hollow: fit. Filled: held out.`;
}

function samples({ calibration, diagnostics, limits: limit, confidence, model }: ReportInput): string {
  const looks = looksOf(diagnostics);
  const pairs: [number, number][] = model.components > 1 ? [[0, 1]] : [];
  if (model.components > 2) pairs.push([0, 2]);
  const suspects = diagnostics.samples.filter(({ suspicions }) => suspicions.length > 0);
  const axis = axisAfterSteps(model.steps, axisFromSpec(model.axis));
  return `<h2>The samples</h2>
<p>${
    suspects.length === 0
      ? "No sample stands out."
      : `${suspects.length} of ${diagnostics.samples.length} sample${suspects.length === 1 ? " stands out and should be looked at by a person. It was not" : "s stand out and should be looked at by a person. None was"} removed: an extreme sample may be the most valuable one, a wrong reference value the most harmful.`
  } At these thresholds about one healthy sample in a hundred stands out by chance in each test.</p>
${
  suspects.length === 0
    ? ""
    : table(
        [
          "sample",
          "leverage",
          "T²/limit",
          "Q/limit, fit",
          "Q/limit, held out",
          ...model.properties.map(({ name }) => `error of ${name}, held out`),
          "why",
        ],
        suspects.map(({ name, leverage, t2, q, error, suspicions }) => [
          name,
          figure(leverage, 3),
          figure(t2.fit / limit.t2, 3),
          figure(q.fit / limit.q, 3),
          figure(q.crossValidated / limit.q, 3),
          ...error.map(({ crossValidated }) => figure(crossValidated, 3)),
          suspicions.map(({ kind, says }) => `${kind}: ${says}`).join(" · "),
        ]),
        true,
      )
}
<div class="cards">${pairs
    .map((pair) =>
      card(
        `Score map, components ${pair[0] + 1} and ${pair[1] + 1}`,
        scorePicture(calibration, pair, looks, confidence),
        `Near samples have like spectra. Broken line: ${confidence * 100} % limit of T² of these two components for new readings.`,
      ),
    )
    .join("")}
${card("Influence: T² and Q", influencePicture(diagnostics, limit), "Hollow: in the fit. Filled: held out. Right: an extreme sample of the known kind. Up: something in the spectrum that the others do not show. Both: look at the instrument first.")}
${model.properties.map(({ name }, k) => card(`Influence: leverage and error of ${name}`, leverageErrorPicture(calibration, diagnostics, k), "A long line from hollow (fit) to filled (held out): the model depends on this sample.")).join("")}
${model.components > 1 ? card("Samples and channels together (biplot)", biplotPicture(calibration, [0, 1], axis.points), "Dots: samples. Line: the channels in order, named where they weigh most. Samples lie in the direction of channels in which they are high.") : ""}</div>
`;
}

function everySample({ diagnostics: { samples: all }, limits: limit, model }: ReportInput): string {
  return `<h2>All samples</h2>${table(
    [
      "sample",
      "leverage",
      "T²/limit, fit",
      "held out",
      "Q/limit, fit",
      "held out",
      ...model.properties.flatMap(({ name }) => [`error of ${name}, fit`, "held out"]),
    ],
    all.map(({ name, leverage, t2, q, error }) => [
      name,
      figure(leverage, 3),
      ...[t2.fit / limit.t2, t2.crossValidated / limit.t2, q.fit / limit.q, q.crossValidated / limit.q].map((value) =>
        figure(value, 3),
      ),
      ...error.flatMap(({ fit, crossValidated }) => [figure(fit, 3), figure(crossValidated, 3)]),
    ]),
  )}`;
}

function channels({ calibration, diagnostics, model }: ReportInput): string {
  const axis = axisAfterSteps(model.steps, axisFromSpec(model.axis));
  const { weights, loadings } = calibration.fit;
  return `<h2>The channels</h2>
<p>Steps before the model: ${escapeText(writeSteps(model.steps))}. Below the first picture everything is drawn on the spectra after these steps.</p>
<div class="cards">
${card("Calibration spectra as measured", bandPicture(calibration), "Line: mean. Grey: from the smallest to the largest value.", true)}
${diagnostics.coefficients.map((one) => card(`Regression coefficients of ${one.name}`, coefficientPicture(axis, one), "Grey: ± two standard errors by jack-knife over the validation's segments. Where the grey touches zero the channel says little.", true)).join("")}
${card("Importance of the channels (VIP)", vipPicture(axis, diagnostics.vip), "The mean of VIP² is 1: above 1 a channel matters more than the average. It ranks, and is no test.", true)}
${stacked(
  "Weights",
  "What each component looks for in the spectrum.",
  weights.map((w, a) => curvePicture(`Weights of component ${a + 1}`, axis, w, `w${a + 1}`)),
)}
${stacked(
  "Loadings",
  "How the spectrum changes with each component. Smooth bands are chemistry, fringes and steps the instrument, grass is noise.",
  loadings.map((p, a) => curvePicture(`Loadings of component ${a + 1}`, axis, p, `p${a + 1}`)),
)}
</div>`;
}

function stacked(title: string, reads: string, plots: readonly Plot[]): string {
  return plots.map((plot, a) => card(`${title}, component ${a + 1}`, plot, a === 0 ? reads : "", true)).join("");
}

function limits({ model, limits: inForce, choice, confidence, diagnostics }: ReportInput): string {
  const odd = diagnostics.samples.filter(({ suspicions }) => suspicions.some(({ kind }) => kind === "odd spectrum"));
  const t2Of = (method: "f" | "beta" | "chi-squared" | "largest") =>
    attempt(() => t2Limit(model, method === "largest" ? { method } : { method, confidence }));
  const { fit, crossValidated } = model.residuals!;
  const held = crossValidated!;
  const beyond = (values: readonly number[], limit: number | undefined) =>
    limit === undefined ? "–" : `${values.filter((value) => value > limit).length} of ${values.length}`;
  const qRows = (residuals: { q: number[]; eigenvalues: number[] }, from: string) =>
    [
      ["Box, by moments", attempt(() => boxMomentsLimit(residuals.q, confidence))],
      ["Box, by eigenvalues", attempt(() => boxLimit(residuals.eigenvalues, confidence))],
      ["Jackson & Mudholkar", attempt(() => jacksonMudholkarLimit(residuals.eigenvalues, confidence))],
      ["empirical", attempt(() => empiricalQuantile(residuals.q, confidence))],
    ].map(([name, limit]) => [
      `Q, ${name}, ${from}`,
      figure(limit as number | undefined),
      beyond(held.q, limit as number | undefined),
    ]);
  const t2Rows = (
    [
      ["F, for new readings", t2Of("f")],
      ["beta, for the calibration samples", t2Of("beta")],
      ["χ², for many samples", t2Of("chi-squared")],
      ["largest in the calibration", t2Of("largest")],
    ] as const
  ).map(([name, limit]) => [`T², ${name}`, figure(limit), beyond(held.t2, limit)]);
  const qChoice = "residuals" in choice.q ? `${choice.q.method}, ${choice.q.residuals} residuals` : "a fixed number";
  return `<h2>Limits</h2>
<p>In force by default at ${confidence * 100} %: T² ${figure(inForce.t2)} (${choice.t2.method.toUpperCase()}), Q ${figure(inForce.q)} (${qChoice}), nearest sample ${figure(inForce.nearest)} (the largest gap within the calibration). Residuals of the fit are smaller than those of new readings, so limits made from them flag far too many. A calibration that is spread evenly over its range makes the F limit of T² too wide: here it is ${figure(t2Of("f")! / t2Of("largest")!, 3)} times the largest T² seen.</p>
${odd.length === 0 ? "" : `<p class="mind"><b>Mind:</b> ${escapeText(odd.map(({ name }) => name).join(", "))} ${odd.length === 1 ? "has an odd spectrum" : "have odd spectra"} and widen${odd.length === 1 ? "s" : ""} the limits of Q. Decide about ${odd.length === 1 ? "it" : "them"} before these limits are relied on.</p>`}
${table(["limit", "value", "held-out samples beyond it"], [...t2Rows, ...qRows(held, "cross-validated residuals"), ...qRows(fit, "residuals of the fit")])}
<p class="quiet">Tracy, Young & Mason 1992 (T²) · Jackson & Mudholkar 1979 · Box 1954 · Nomikos & MacGregor 1995 (moments). An empirical ${confidence * 100} % point wants about ${Math.round(10 / (1 - confidence))} samples.</p>`;
}

function attempt(work: () => number): number | undefined {
  try {
    return work();
  } catch (error) {
    if (error instanceof LimitError) return undefined;
    throw error;
  }
}

function record({ model }: ReportInput): string {
  const { samples, crossValidation, properties } = model;
  const excluded = samples.excluded.map(({ name, reason }) => name + (reason ? ` (${reason})` : "")).join(", ");
  const entries: [string, string][] = [
    ["model", `${model.name}, SHA-256 ${modelId(model)}`],
    ["made", model.created],
    [
      "properties",
      properties
        .map(({ name, unit, range }) => `${name}${unit && ` [${unit}]`}, ${figure(range[0])} to ${figure(range[1])}`)
        .join("; "),
    ],
    ["axis", describeAxis(axisFromSpec(model.axis))],
    ["steps", writeSteps(model.steps)],
    ["components", String(model.components)],
    [
      "y",
      properties.some(({ deviation }) => deviation !== 1) ? "each divided by its standard deviation" : "not scaled",
    ],
    [
      "validation",
      `${crossValidation!.method}, ${crossValidation!.segments} segments; every step and the model refitted in each`,
    ],
    ["excluded by hand", excluded || "none"],
    [
      "uncertainty of a prediction",
      "± t(0.975; n − A − 1) · SEC · √(1 + h), h = 1/n + T²/(n − 1); the form of ASTM E1655. None is given for a reading that is not inside",
    ],
    ["method", "PLS by NIPALS deflation (Wold, Sjöström & Eriksson 2001)"],
    ...(model.notes ? ([["notes", model.notes]] as [string, string][]) : []),
  ];
  return `<h2>Record</h2>
<dl>${entries.map(([term, text]) => `<dt>${term}</dt><dd>${escapeText(text)}</dd>`).join("")}</dl>
<p class="quiet">Made by Millrace. Advisory: not a safety function, and no replacement of licensed practice or the site's own procedures.</p>`;
}

/** With a true minus sign. */
function figure(value: number | undefined, digits?: number): string {
  return plainFigure(value, digits).replaceAll("-", "−");
}

/** The samples to look at, with the colour that each stands in. */
function looksOf({ samples: all }: Diagnostics): Map<string, Look> {
  return new Map(
    all.filter(({ suspicions }) => suspicions.length > 0).map((sample) => [sample.name, lookOfSample(sample)]),
  );
}

function card(title: string, plot: Plot, reads: string, wide = false): string {
  return `<figure${wide ? ' class="wide"' : ""}><h3>${escapeText(title)}</h3>${plot}${reads && `<figcaption>${reads}</figcaption>`}</figure>`;
}

function table(header: readonly string[], rows: readonly (readonly string[])[], lastIsWords = false): string {
  const words = (k: number) => (lastIsWords && k === header.length - 1 ? ' class="words"' : "");
  const line = (cells: readonly string[], tag: "th" | "td") =>
    `<tr>${cells.map((cell, k) => `<${tag}${words(k)}>${escapeText(cell)}</${tag}>`).join("")}</tr>`;
  return `<div class="scroll"><table><thead>${line(header, "th")}</thead><tbody>${rows.map((row) => line(row, "td")).join("")}</tbody></table></div>`;
}
