import type { Region } from "../messages/index.ts";
import type { CompiledModel } from "./compile-model.ts";
import { predictionContributions, qContributions, t2Contributions } from "./contributions.ts";
import { regionsOf } from "./regions.ts";
import { coefficientsOf, rotationsOf } from "./rotations.ts";
import { newScore, scoreInto } from "./score.ts";

/** Why a reading scores as it does, channel by channel after the model's steps. */
export interface Explanation {
  /** points of the axis after the steps, unit of the model's axis */
  axis: number[];
  preprocessed: number[];
  /** P t */
  reconstructed: number[];
  /** e = preprocessed − reconstructed */
  residual: number[];
  /** adds up to T²; empty when the model keeps no scores */
  t2: number[];
  /** e_j² with the sign of e_j; the absolute values add up to Q */
  q: number[];
  /** for each property, x_j b_j: adds up to ŷ − ȳ */
  predictions: { name: string; contributions: number[]; regions: Region[] }[];
  /** share of Σ|c|; sign: whether the region adds to T² (1) or takes away (−1) */
  t2Regions: Region[];
  /** sign: what is measured lies above (1) or below (−1) what the model can explain, in the unit that the steps leave */
  qRegions: Region[];
  scores: number[];
}

/**
 * Explains one spectrum. Allocates; meant for the reading that somebody looks at, or an alarm that is raised.
 *
 * @param values raw, on the model's axis
 * @throws AxisError as scoreInto
 */
export function explain(values: Float64Array, compiled: CompiledModel): Explanation {
  const { model, kernel, axisAfter } = compiled;
  const score = newScore(compiled);
  scoreInto(values, compiled, score);
  const left = Float64Array.from(kernel.x); // scoring leaves the residual there, or x itself where there are no components
  const x = new Float64Array(left.length);
  kernel.apply(values, x);
  const rotations = rotationsOf(arrays(model.weights), arrays(model.loadings));
  const t2 = model.scores ? t2Contributions(x, rotations, inverseTimesScores(compiled)) : new Float64Array(0);
  const q = model.loadings ? qContributions(left) : new Float64Array(0);
  const coefficients = model.coefficients ?? coefficientsOf(rotations, model.yLoadings ?? []);
  return {
    axis: Array.from(axisAfter.points),
    preprocessed: Array.from(x),
    reconstructed: model.loadings ? Array.from(x, (value, j) => value - left[j]) : [],
    residual: model.loadings ? Array.from(left) : [],
    t2: Array.from(t2),
    q: Array.from(q),
    predictions: model.properties.map(({ name, deviation }, k) => {
      const contributions = Array.from(
        predictionContributions(x, coefficients[k]),
        (part) => part * (model.coefficients ? 1 : deviation),
      );
      return { name, contributions, regions: regionsOf(contributions, axisAfter) };
    }),
    t2Regions: regionsOf(t2, axisAfter),
    qRegions: regionsOf(q, axisAfter),
    scores: Array.from(score.scores),
  };
}

/** S⁻¹t = L⁻ᵀ z for the spectrum scored last. */
function inverseTimesScores({ kernel, components: A }: CompiledModel): Float64Array {
  const { whiten } = kernel.space!;
  return Float64Array.from({ length: A }, (_, a) => {
    let sum = 0;
    for (let b = a; b < A; b++) sum += whiten[b * A + a] * kernel.z[b];
    return sum;
  });
}

function arrays(rows: readonly (readonly number[])[] = []): Float64Array[] {
  return rows.map((row) => Float64Array.from(row));
}
