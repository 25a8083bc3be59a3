import type { Agreement } from "../messages/index.ts";
import type { Model } from "../model/index.ts";
import { controlCharts } from "./control-charts.ts";
import { type Compared, type CountedPair, findingOf, levelled } from "./finding.ts";
import { innerPlaces } from "./inner-place.ts";
import { oddPair } from "./odd-pair.ts";
import { agreementStatistics, type Promised } from "./statistics.ts";
import { runsOf } from "./stretches.ts";

/** A pair that counts, with the scores of its reading where its spectrum was there. */
export interface ScoredPair extends CountedPair {
  scores: readonly number[] | null;
}

export type Comparison = Pick<Agreement, "pairs" | "finding" | "statistics" | "charts" | "odd" | "inner">;

/** Least pairs for statistics: a line needs three. */
const leastPairs = 3;

/**
 * All that can be said of one property of one model beside the laboratory. Pure.
 *
 * @param pairs that count, predicted by this model, in order of sample time
 * @param property index among the model's
 */
export function compare(pairs: readonly ScoredPair[], model: Model, property: number): Comparison {
  const compared = comparedOf(model, property);
  const predicted = pairs.map((pair) => pair.predicted);
  const laboratory = pairs.map((pair) => pair.laboratory);
  const errors = predicted.map((value, i) => value - laboratory[i]);
  const placed = pairs.flatMap(({ scores, laboratory }, index) => (scores ? [{ index, t: scores, laboratory }] : []));
  return {
    pairs: { time: pairs.map(({ time }) => time), predicted, laboratory },
    finding: findingOf(pairs, compared),
    statistics: pairs.length < leastPairs ? null : agreementStatistics(predicted, laboratory, compared.promised),
    charts: controlCharts(errors) ?? null,
    odd: oddPair(levelled(runsOf(errors), errors)) ?? null,
    inner: innerPlaces(placed, model, property),
  };
}

/** What a model says of one of its properties, as the comparison needs it. */
export function comparedOf(model: Model, property: number): Compared {
  const { name, unit, range } = model.properties[property];
  return { property: name, unit, range, promised: promisedOf(model, property) };
}

/** RMSECV at the model's number of components, with n − A − 1 degrees of freedom. */
export function promisedOf({ properties, components, samples }: Model, property: number): Promised | undefined {
  const rmsecv = properties[property].rmsecv?.[components];
  const freedom = samples.names.length - components - 1;
  return rmsecv !== undefined && rmsecv > 0 && freedom > 0 ? { rmsecv, freedom } : undefined;
}
