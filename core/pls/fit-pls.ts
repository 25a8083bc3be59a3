import { symmetricEigen } from "../limits/index.ts";
import { FitError } from "./fit-error.ts";
import { rotationsOf } from "./rotations.ts";

/** A PLS fit. Lists by component hold one array a component, lists by sample one a sample. */
export interface PlsFit {
  components: number;
  /** W: A × channels, unit length */
  weights: Float64Array[];
  /** P: A × channels */
  loadings: Float64Array[];
  /** Q: A × properties, in units of the scaled y */
  yLoadings: Float64Array[];
  /** R = W(PᵀW)⁻¹: A × channels, so that T = X R for any X */
  rotations: Float64Array[];
  /** T: n × A */
  scores: Float64Array[];
  /** U: n × A, u = Y q / qᵀq of the Y left before the component */
  yScores: Float64Array[];
  /** E = X − T Pᵀ: n × channels */
  residuals: Float64Array[];
  yMean: Float64Array;
  /** 1 where y was not scaled */
  yDeviation: Float64Array;
}

/** How small, against the table before any component, what is left may be and still count as something. */
const exhausted = 1e-10;

/** Numbers whose squares leave the range of a double are no measurements. */
const tiny = 1e-100;
const huge = 1e100;

/**
 * Fits PLS by NIPALS deflation, for one or several y. Neither table is changed.
 *
 *     w = dominant left singular vector of EᵀF     t = E w     p = Eᵀt / tᵀt     q = Fᵀt / tᵀt     E ← E − t pᵀ     F ← F − t qᵀ
 *
 * which for one y is w ∝ Eᵀf. For several the vector is what NIPALS' inner loop converges to; it is taken from the eigenvectors of the small
 * FᵀE EᵀF, so that two close singular values cannot leave it half-way. Sign: the largest y-loading of each component is positive.
 *
 * @param x n spectra after the steps, centred
 * @param y n × m reference values in their own units; they are centred here, and divided by their standard deviation (n − 1) if `scaleY`
 * @param components A, at most n − 1 and the rank of x
 * @throws FitError when the table holds fewer components than asked (naming how many it holds), or a y does not vary
 *
 * Source: Wold, Sjöström & Eriksson, Chemom. Intell. Lab. Syst. 58 (2001) 109; Höskuldsson, J. Chemom. 2 (1988) 211 for the eigenvector
 * (both from memory). Checked against R's pls and scikit-learn: test/reference/gasoline.test.ts, linnerud.test.ts.
 */
export function fitPls(
  x: readonly Float64Array[],
  y: readonly Float64Array[],
  { components, scaleY }: { components: number; scaleY: boolean },
): PlsFit {
  const fit = fitUpTo(x, y, { components, scaleY });
  if (fit.components === components) return fit;
  throw new FitError("components", {
    got: `${components}`,
    expected: `at most ${fit.components}: after that nothing is left of the spectra, or nothing of the reference values, to explain`,
    todo: "Take fewer components, or more and more varied samples.",
  });
}

/** As {@link fitPls}, but stops where the table is exhausted; `components` of the result says where. */
export function fitUpTo(
  x: readonly Float64Array[],
  y: readonly Float64Array[],
  { components, scaleY }: { components: number; scaleY: boolean },
): PlsFit {
  const n = x.length;
  const p = x[0].length;
  const { left: f, mean: yMean, deviation: yDeviation } = centredY(y, scaleY);
  const e = x.map((row) => Float64Array.from(row));
  const sizeX = Math.sqrt(squares(e));
  const sizeY = Math.sqrt(squares(f));
  checkMeasure(sizeX);
  const weights: Float64Array[] = [];
  const loadings: Float64Array[] = [];
  const yLoadings: Float64Array[] = [];
  const scores = x.map(() => new Float64Array(components));
  const yScores = x.map(() => new Float64Array(components));
  let a = 0;
  for (; a < Math.min(components, n - 1, p); a++) {
    if (Math.sqrt(squares(e)) <= exhausted * sizeX || Math.sqrt(squares(f)) <= exhausted * sizeY) break;
    const w = weightOf(e, f);
    if (w === undefined) break;
    const t = e.map((row) => dot(row, w));
    const tt = t.reduce((sum, value) => sum + value * value, 0);
    if (Math.sqrt(tt) <= exhausted * sizeX) break;
    const loading = combine(e, t, 1 / tt);
    const q = combine(f, t, 1 / tt);
    const qq = dot(q, q);
    for (let i = 0; i < n; i++) {
      scores[i][a] = t[i];
      yScores[i][a] = qq > 0 ? dot(f[i], q) / qq : 0;
      subtract(e[i], loading, t[i]);
      subtract(f[i], q, t[i]);
    }
    weights.push(w);
    loadings.push(loading);
    yLoadings.push(q);
  }
  return {
    components: a,
    weights,
    loadings,
    yLoadings,
    rotations: rotationsOf(weights, loadings),
    scores: scores.map((row) => row.slice(0, a)),
    yScores: yScores.map((row) => row.slice(0, a)),
    residuals: e,
    yMean,
    yDeviation,
  };
}

function checkMeasure(sizeX: number): void {
  if (sizeX === 0 || (sizeX > tiny && sizeX < huge)) return;
  throw new FitError("the spectra after the steps", {
    got: `of size ${sizeX}`,
    expected: "numbers whose squares a computer can hold",
    todo: "Check the unit of the spectra.",
  });
}

/** Mean and deviation of each y, and what is left. @throws FitError naming a y (by its place) that does not vary. */
function centredY(y: readonly Float64Array[], scaleY: boolean) {
  const n = y.length;
  const m = y[0].length;
  const mean = new Float64Array(m);
  const deviation = new Float64Array(m).fill(1);
  for (let k = 0; k < m; k++) {
    for (let i = 0; i < n; i++) mean[k] += y[i][k] / n;
    let sum = 0;
    for (let i = 0; i < n; i++) sum += (y[i][k] - mean[k]) ** 2;
    const found = Math.sqrt(sum / (n - 1));
    if (!(found > Math.max(tiny, 1e-12 * Math.abs(mean[k])) && found < huge)) {
      throw new FitError(`property ${k + 1}`, {
        got: found < huge ? `${y[0][k]} in every sample` : "beyond all measure",
        expected: "reference values that vary",
        todo: "Leave the property out, or take samples that differ in it.",
      });
    }
    if (scaleY) deviation[k] = found;
  }
  const left = y.map((row) => row.map((value, k) => (value - mean[k]) / deviation[k]));
  return { left, mean, deviation };
}

/** The weight vector of what is left, of unit length; undefined when x and y have nothing in common any more. */
function weightOf(e: readonly Float64Array[], f: readonly Float64Array[]): Float64Array | undefined {
  const m = f[0].length;
  const products = Array.from({ length: m }, (_, k) =>
    combine(
      e,
      f.map((row) => row[k]),
      1,
    ),
  );
  const least = exhausted * Math.sqrt(squares(e)) * Math.sqrt(squares(f));
  if (m === 1) return unit(products[0], least);
  const { vectors } = symmetricEigen(products.map((a) => products.map((b) => dot(a, b))));
  if (vectors.length === 0) return undefined;
  const [dominant] = vectors;
  const largest = dominant.reduce((a, b) => (Math.abs(b) > Math.abs(a) ? b : a));
  return unit(combine(products, dominant, Math.sign(largest)), least);
}

function unit(v: Float64Array, least: number): Float64Array | undefined {
  const length = Math.sqrt(dot(v, v));
  return length > least ? v.map((value) => value / length) : undefined;
}

/** factor · Σ_i by_i rows_i */
function combine(rows: readonly Float64Array[], by: readonly number[], factor: number): Float64Array {
  const out = new Float64Array(rows[0].length);
  for (let i = 0; i < rows.length; i++) {
    const row = rows[i];
    const share = by[i] * factor;
    for (let j = 0; j < out.length; j++) out[j] += share * row[j];
  }
  return out;
}

function subtract(row: Float64Array, direction: Float64Array, amount: number): void {
  for (let j = 0; j < row.length; j++) row[j] -= amount * direction[j];
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let j = 0; j < a.length; j++) sum += a[j] * b[j];
  return sum;
}

function squares(rows: readonly Float64Array[]): number {
  let sum = 0;
  for (const row of rows) sum += dot(row, row);
  return sum;
}
