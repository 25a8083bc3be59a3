import type { Model } from "../model/index.ts";
import { boxLimit, boxMomentsLimit } from "./box.ts";
import { empiricalQuantile } from "./empirical.ts";
import { jacksonMudholkarLimit } from "./jackson-mudholkar.ts";
import { LimitError } from "./limit-error.ts";
import { calibrationNearest, calibrationT2, scoreSpaceOf } from "./score-space.ts";
import { defaultStatisticChoice, type StatisticChoice } from "./statistic-choice.ts";
import { t2LimitBeta, t2LimitChiSquared, t2LimitF } from "./t2-limits.ts";

/** T² and nearest have no unit; Q has that of the stepped spectrum, squared. */
export interface StatisticLimits {
  t2: number;
  q: number;
  nearest: number;
}

/**
 * The limits of a model's statistics by the methods chosen.
 *
 * @throws LimitError naming what the model lacks for a method
 */
export function statisticLimits(model: Model, choice: StatisticChoice = defaultStatisticChoice()): StatisticLimits {
  return { t2: t2Limit(model, choice.t2), q: qLimit(model, choice.q), nearest: nearestLimit(model, choice.nearest) };
}

export function t2Limit(model: Model, choice: StatisticChoice["t2"]): number {
  if ("number" in choice) return choice.number;
  const scores = model.scores ?? missing(model, "T²", "calibration scores");
  if (choice.method === "largest") return Math.max(...calibrationT2(scoreSpaceOf(scores)));
  const size = { n: scores.length, components: model.components, confidence: choice.confidence };
  switch (choice.method) {
    case "f":
      return t2LimitF(size);
    case "beta":
      return t2LimitBeta(size);
    case "chi-squared":
      return t2LimitChiSquared(size);
    default:
      return choice satisfies never;
  }
}

export function qLimit(model: Model, choice: StatisticChoice["q"]): number {
  if ("number" in choice) return choice.number;
  const { residuals } = model;
  const crossValidated = choice.residuals === "cross-validated";
  const { q, eigenvalues } =
    (crossValidated ? residuals?.crossValidated : residuals?.fit) ??
    missing(model, "Q", `${choice.residuals} residuals`);
  switch (choice.method) {
    case "box-moments":
      return boxMomentsLimit(q, choice.confidence);
    case "box":
      return boxLimit(eigenvalues, choice.confidence);
    case "jackson-mudholkar":
      return jacksonMudholkarLimit(eigenvalues, choice.confidence);
    case "empirical":
      return empiricalQuantile(q, choice.confidence);
    default:
      return choice satisfies never;
  }
}

export function nearestLimit(model: Model, choice: StatisticChoice["nearest"]): number {
  if ("number" in choice) return choice.number;
  const scores = model.scores ?? missing(model, "the nearest sample", "calibration scores");
  return Math.max(...calibrationNearest(scoreSpaceOf(scores)));
}

function missing(model: Model, statistic: string, what: string): never {
  throw new LimitError(`the model "${model.name}"`, {
    got: `without ${what}`,
    expected: `${what}, which a limit of ${statistic} is made of`,
    todo: "Import the model with them, set the limit as a fixed number, or learn it from a reference period.",
  });
}
