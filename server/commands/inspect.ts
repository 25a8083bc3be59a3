import { Command } from "commander";
import {
  boxLimit,
  boxMomentsLimit,
  empiricalQuantile,
  jacksonMudholkarLimit,
  LimitError,
  nearestLimit,
  qLimit,
  t2Limit,
} from "../../core/limits/index.ts";
import { type Model, modelId } from "../../core/model/index.ts";
import { axisFromSpec, describeAxis, writeSteps } from "../../core/spectrum/index.ts";
import { columns, figure } from "./figures.ts";
import { readModel } from "./files.ts";
import { choiceOf, confidenceOption } from "./option-values.ts";

export function inspectCommand(): Command {
  return new Command("inspect")
    .description("check a model file and describe it")
    .argument("<model>", "model file")
    .option("--confidence <share>", "of the limits", confidenceOption, 0.99)
    .option("--json", "print as JSON; rmsec and rmsecv at the top are those of the first property")
    .action(async (file: string, { confidence, json }: { confidence: number; json?: boolean }) => {
      const model = await readModel(file);
      const found = descriptionOf(model, confidence);
      process.stdout.write(json ? `${JSON.stringify(found)}\n` : inWords(found));
    });
}

type Description = ReturnType<typeof descriptionOf>;

function descriptionOf(model: Model, confidence: number) {
  const { properties, samples, components } = model;
  return {
    id: modelId(model),
    name: model.name,
    created: model.created,
    origin: model.origin,
    notes: model.notes,
    components,
    properties: properties.map(({ name, unit, range, rmsec, sec, rmsecv, rmsep }) => ({
      name,
      unit,
      range,
      rmsec,
      sec,
      rmsecv,
      rmsep,
    })),
    axis: { ...model.axis, says: describeAxis(axisFromSpec(model.axis)) },
    steps: writeSteps(model.steps),
    samples: samples.names.length,
    excluded: samples.excluded,
    /** √(Σe²/n) */
    rmsec: properties[0].rmsec ?? null,
    /** √(PRESS/n) by number of components, from 0 */
    rmsecv: properties[0].rmsecv ?? null,
    validation: model.crossValidation?.method ?? null,
    limits: limitsOf(model, confidence),
    warnings: warningsOf(model),
  };
}

/** The limits that judge by default, and beside them every other that the model allows; null: it lacks what the limit is made of. */
function limitsOf(model: Model, confidence: number) {
  const choice = choiceOf({ confidence });
  const t2 = (method: "f" | "beta" | "chi-squared") => orNull(() => t2Limit(model, { method, confidence }));
  return {
    confidence,
    t2: orNull(() => t2Limit(model, choice.t2)),
    q: orNull(() => qLimit(model, choice.q)),
    nearest: orNull(() => nearestLimit(model, choice.nearest)),
    choice,
    all: {
      t2: {
        f: t2("f"),
        beta: t2("beta"),
        chiSquared: t2("chi-squared"),
        largest: orNull(() => t2Limit(model, { method: "largest" })),
      },
      q: {
        crossValidated: qLimitsOf(model.residuals?.crossValidated, confidence),
        fit: qLimitsOf(model.residuals?.fit, confidence),
      },
    },
  };
}

function qLimitsOf(residuals: { q: number[]; eigenvalues: number[] } | undefined, confidence: number) {
  if (!residuals) return null;
  return {
    boxMoments: orNull(() => boxMomentsLimit(residuals.q, confidence)),
    box: orNull(() => boxLimit(residuals.eigenvalues, confidence)),
    jacksonMudholkar: orNull(() => jacksonMudholkarLimit(residuals.eigenvalues, confidence)),
    empirical: orNull(() => empiricalQuantile(residuals.q, confidence)),
  };
}

function orNull(work: () => number): number | null {
  try {
    return work();
  } catch (error) {
    if (error instanceof LimitError) return null;
    throw error;
  }
}

/** What a person should know before they rely on the model. */
export function warningsOf(model: Model): string[] {
  const { samples, components } = model;
  const n = samples.names.length;
  const warnings: string[] = [];
  const excluded = samples.excluded.length;
  if (excluded > 0.1 * (n + excluded)) {
    const share = Math.round((100 * excluded) / (n + excluded));
    warnings.push(
      `${excluded} of ${n + excluded} samples (${share} %) were excluded: expect the model to fail on the like share of new samples.`,
    );
  }
  const wanted = Math.max(24, 6 * (components + 1));
  if (model.scores && n < wanted) {
    warnings.push(
      `${n} calibration samples are few: ASTM E1655 asks for at least ${wanted} for ${components} components (from memory).`,
    );
  }
  if (!model.scores)
    warnings.push(
      "Without calibration scores T², leverage and the nearest sample cannot be judged, and no uncertainty is given.",
    );
  if (!model.loadings)
    warnings.push(
      "Without loadings Q cannot be computed: something in a spectrum that the calibration never saw goes unnoticed.",
    );
  else if (!model.residuals)
    warnings.push("Without residuals Q has no limit of its own: set a fixed one, or learn it from a reference period.");
  else if (!model.residuals.crossValidated)
    warnings.push(
      "Without cross-validated residuals only limits from the fit remain, which are too tight for new readings.",
    );
  return warnings;
}

function inWords(found: Description): string {
  const { limits } = found;
  const header = ["property", "unit", "from", "to", "RMSEC", "RMSECV", "RMSEP"];
  const rows = found.properties.map(({ name, unit, range, rmsec, rmsecv, rmsep }) => [
    name,
    unit || "–",
    figure(range[0]),
    figure(range[1]),
    figure(rmsec),
    figure(rmsecv?.[found.components]),
    figure(rmsep),
  ]);
  const lines = [
    `${found.name} (${found.id.slice(0, 12)}), ${found.origin} ${found.created}`,
    `${found.components} components, ${found.samples} samples, ${found.axis.says}`,
    `steps: ${found.steps || "none"}; validated by: ${found.validation ?? "nothing"}`,
    "",
    columns([header, ...rows]),
    "",
    `limits at ${limits.confidence * 100} %: T² ${figure(limits.t2)} (largest in the calibration ${figure(limits.all.t2.largest)}), Q ${figure(limits.q)}, nearest ${figure(limits.nearest)}`,
    ...(found.excluded.length > 0
      ? [`excluded: ${found.excluded.map(({ name, reason }) => name + (reason ? ` (${reason})` : "")).join(", ")}`]
      : []),
    ...(found.notes ? [`notes: ${found.notes}`] : []),
    ...found.warnings.map((warning) => `Mind: ${warning}`),
  ];
  return `${lines.join("\n")}\n`;
}
