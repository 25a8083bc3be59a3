import { type ScoreSpace, scoreSpaceOf } from "../limits/index.ts";
import { type Model, type ModelProperty, modelId } from "../model/index.ts";
import { type Apply, type Axis, axisAfterSteps, axisFromSpec, compileSteps } from "../spectrum/index.ts";
import { coefficientsOf, rotationsOf } from "./rotations.ts";
import { uncertaintyFactor } from "./uncertainty.ts";

export interface CompiledProperty extends ModelProperty {
  /** half width of the interval at leverage 0, unit of the property; NaN when the model file does not say */
  uncertaintyFactor: number;
}

/**
 * A model made ready to score. It holds working memory, so one thread and one reading at a time: scoring writes nothing else.
 */
export interface CompiledModel {
  /** SHA-256 of the model's canonical JSON */
  id: string;
  model: Model;
  /** of the raw spectra that it takes */
  axis: Axis;
  /** after the steps */
  axisAfter: Axis;
  /** number of raw values */
  channels: number;
  components: number;
  /** number of calibration samples whose scores it keeps; 0 when it keeps none */
  samples: number;
  properties: CompiledProperty[];
  /** which statistics the model's contents allow; the others come out as NaN */
  judges: { t2: boolean; q: boolean; nearest: boolean };
  /** confidence of the uncertainties */
  confidence: number;
  kernel: Kernel;
}

/** What the scoring kernel reads. Components are padded with zeros to a multiple of 4 and laid out in blocks of 4: [block][channel][4]. */
export interface Kernel {
  apply: Apply;
  /** working memory: the spectrum after the steps, then what is left of it */
  x: Float64Array;
  blocks: number;
  rotations: Float64Array;
  loadings: Float64Array;
  /** working memory: padded scores */
  t: Float64Array;
  /** working memory: whitened scores */
  z: Float64Array;
  space: ScoreSpace | undefined;
  /** unscaled: ŷ_k = mean_k + Σ_a t_a yLoadings[a m + k] */
  yLoadings: Float64Array;
  yMean: Float64Array;
  /** B per unit of the property, properties × channels, property after property */
  coefficients: Float64Array;
  uncertaintyFactors: Float64Array;
}

/**
 * Makes a model ready to score. The model must have passed {@link parseModel} or be fitted here.
 *
 * @param options.confidence of the uncertainties, two-sided (default 0.95)
 * @throws LimitError when its calibration scores span no space
 */
export function compileModel(model: Model, { confidence = 0.95 }: { confidence?: number } = {}): CompiledModel {
  const axis = axisFromSpec(model.axis);
  const axisAfter = axisAfterSteps(model.steps, axis);
  const space = model.scores && scoreSpaceOf(model.scores);
  const factors = model.properties.map((property) => uncertaintyFactor(property, model, confidence));
  return {
    id: modelId(model),
    model,
    axis,
    axisAfter,
    channels: axis.points.length,
    components: model.components,
    samples: model.scores?.length ?? 0,
    properties: model.properties.map((property, k) => ({ ...property, uncertaintyFactor: factors[k] })),
    judges: { t2: space !== undefined, q: model.loadings !== undefined, nearest: space !== undefined },
    confidence,
    kernel: kernelOf(model, compileSteps(model.steps, axis), axisAfter.points.length, space, factors),
  };
}

function kernelOf(model: Model, apply: Apply, p: number, space: ScoreSpace | undefined, factors: number[]): Kernel {
  const { properties } = model;
  const m = properties.length;
  const blocks = Math.ceil(model.components / 4);
  const weights = (model.weights ?? []).map((row) => Float64Array.from(row));
  const loadings = (model.loadings ?? []).map((row) => Float64Array.from(row));
  const rotations = rotationsOf(weights, loadings);
  const deviations = properties.map(({ deviation }) => deviation);
  const yLoadings = (model.yLoadings ?? []).map((row) => row.map((value, k) => value * deviations[k]));
  const coefficients = new Float64Array(m * p);
  const rows = model.coefficients ?? coefficientsOf(rotations, yLoadings);
  rows.forEach((row, k) => {
    coefficients.set(row, k * p);
  });
  return {
    apply,
    x: new Float64Array(p),
    blocks,
    rotations: inBlocks(rotations, p, blocks),
    loadings: inBlocks(loadings, p, blocks),
    t: new Float64Array(blocks * 4),
    z: new Float64Array(model.components),
    space,
    yLoadings: Float64Array.from(yLoadings.flat()),
    yMean: Float64Array.from(properties, ({ mean }) => mean),
    coefficients,
    uncertaintyFactors: Float64Array.from(factors),
  };
}

function inBlocks(rows: readonly Float64Array[], p: number, blocks: number): Float64Array {
  const out = new Float64Array(blocks * p * 4);
  rows.forEach((row, a) => {
    const start = (a >> 2) * p * 4 + (a & 3);
    for (let j = 0; j < p; j++) out[start + j * 4] = row[j];
  });
  return out;
}
