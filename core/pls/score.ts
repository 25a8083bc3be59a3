import { AxisError } from "../spectrum/index.ts";
import type { CompiledModel, Kernel } from "./compile-model.ts";

/** What scoring makes of one spectrum. Arrays are written over by the next one. */
export interface Score {
  /** t: A scores, in the unit that the steps leave */
  scores: Float64Array;
  /** ŷ, unit of each property */
  values: Float64Array;
  /** half width of the interval at the compiled confidence, unit of each property; NaN when the model does not say SEC */
  uncertainties: Float64Array;
  /** no unit; NaN when the model keeps no scores */
  t2: number;
  /** unit of the stepped spectrum, squared; NaN when the model has no loadings */
  q: number;
  /** 1/n + T²/(n − 1) */
  leverage: number;
  /** Mahalanobis distance to the nearest calibration sample */
  nearest: number;
}

export function newScore({ components, properties }: CompiledModel): Score {
  return {
    scores: new Float64Array(components),
    values: new Float64Array(properties.length),
    uncertainties: new Float64Array(properties.length),
    t2: Number.NaN,
    q: Number.NaN,
    leverage: Number.NaN,
    nearest: Number.NaN,
  };
}

/**
 * Scores one spectrum. Writes into `out`; allocates nothing; does not change `values`.
 *
 *     x = steps(values)     t = Rᵀx     ŷ = ȳ + Qt     T² = tᵀS⁻¹t     Q = ‖x − Pt‖²     leverage = 1/n + T²/(n − 1)
 *     nearest = min_i √((t − t_i)ᵀS⁻¹(t − t_i))     uncertainty: see uncertainty.ts
 *
 * @param values  raw, on the model's axis
 * @throws AxisError when `values` are not as many as the axis has points. NaN in, NaN out (a step may make NaN too: the logarithm of no
 *         light, SNV of a flat spectrum): validity is judged before, and by whether T² and Q are finite.
 *
 * Source: Wold, Sjöström & Eriksson, Chemom. Intell. Lab. Syst. 58 (2001) 109, for R = W(PᵀW)⁻¹; ASTM E1655 for leverage and the nearest
 * sample (from memory). Checked against R: test/reference/gasoline-monitoring.test.ts.
 */
export function scoreInto(values: Float64Array, compiled: CompiledModel, out: Score): void {
  const { kernel } = compiled;
  if (values.length !== compiled.channels) throw wrongLength(values, compiled);
  kernel.apply(values, kernel.x);
  if (compiled.components === 0) {
    predictByCoefficientsInto(kernel, out.values);
  } else {
    rotate(kernel);
    for (let a = 0; a < out.scores.length; a++) out.scores[a] = kernel.t[a];
    predict(kernel, out.values);
    out.q = residual(kernel);
  }
  place(kernel, out);
  for (let k = 0; k < out.uncertainties.length; k++) {
    out.uncertainties[k] = kernel.uncertaintyFactors[k] * Math.sqrt(1 + out.leverage);
  }
}

/** The other route to a prediction: ŷ = ȳ + Bᵀx, unit of each property. The two agree but for rounding. @throws AxisError as scoreInto */
export function predictByCoefficients(values: Float64Array, compiled: CompiledModel): Float64Array {
  if (values.length !== compiled.channels) throw wrongLength(values, compiled);
  const out = new Float64Array(compiled.properties.length);
  compiled.kernel.apply(values, compiled.kernel.x);
  predictByCoefficientsInto(compiled.kernel, out);
  return out;
}

function predictByCoefficientsInto({ x, coefficients, yMean }: Kernel, out: Float64Array): void {
  const p = x.length;
  for (let k = 0; k < out.length; k++) {
    let sum = yMean[k];
    for (let j = 0; j < p; j++) sum += coefficients[k * p + j] * x[j];
    out[k] = sum;
  }
}

/** Four components a walk: four sums that do not wait for each other. */
function rotate({ x, rotations, t, blocks }: Kernel): void {
  const p = x.length;
  let o = 0;
  for (let block = 0; block < blocks; block++) {
    let t0 = 0;
    let t1 = 0;
    let t2 = 0;
    let t3 = 0;
    for (let j = 0; j < p; j++) {
      const value = x[j];
      t0 += value * rotations[o];
      t1 += value * rotations[o + 1];
      t2 += value * rotations[o + 2];
      t3 += value * rotations[o + 3];
      o += 4;
    }
    t[block * 4] = t0;
    t[block * 4 + 1] = t1;
    t[block * 4 + 2] = t2;
    t[block * 4 + 3] = t3;
  }
}

function predict({ t, yLoadings, yMean }: Kernel, out: Float64Array): void {
  const m = out.length;
  for (let k = 0; k < m; k++) {
    let sum = yMean[k];
    for (let i = k, a = 0; i < yLoadings.length; i += m, a++) sum += t[a] * yLoadings[i];
    out[k] = sum;
  }
}

/** Turns x into the residual and returns its sum of squares. */
function residual({ x, loadings, t, blocks }: Kernel): number {
  const p = x.length;
  let q = 0;
  let o = 0;
  for (let block = 0; block < blocks; block++) {
    const t0 = t[block * 4];
    const t1 = t[block * 4 + 1];
    const t2 = t[block * 4 + 2];
    const t3 = t[block * 4 + 3];
    q = 0;
    for (let j = 0; j < p; j++) {
      const left = x[j] - (t0 * loadings[o] + t1 * loadings[o + 1] + (t2 * loadings[o + 2] + t3 * loadings[o + 3]));
      x[j] = left;
      q += left * left;
      o += 4;
    }
  }
  return q;
}

function place({ t, z, space }: Kernel, out: Score): void {
  if (!space) return;
  const { n, whiten, places } = space;
  const A = z.length;
  let t2 = 0;
  for (let a = 0; a < A; a++) {
    let sum = 0;
    for (let b = 0; b <= a; b++) sum += whiten[a * A + b] * t[b];
    z[a] = sum;
    t2 += sum * sum;
  }
  let least = Number.POSITIVE_INFINITY;
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let a = 0; a < A; a++) {
      const apart = z[a] - places[i * A + a];
      sum += apart * apart;
    }
    if (!(sum >= least)) least = sum;
  }
  out.t2 = t2;
  out.leverage = 1 / n + t2 / (n - 1);
  out.nearest = Math.sqrt(least);
}

function wrongLength(values: Float64Array, { axis, channels }: CompiledModel): AxisError {
  const { unit, points } = axis;
  return new AxisError("spectrum", {
    got: `${values.length} values`,
    expected: `${channels}, one for each point of the model's axis (${points[0]}–${points[channels - 1]} ${unit})`,
    todo: "Bring the spectrum to the model's axis first.",
  });
}
