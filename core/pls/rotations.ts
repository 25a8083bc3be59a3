import { inverse, Matrix } from "ml-matrix";
import { FitError } from "./fit-error.ts";

/**
 * R = W (PᵀW)⁻¹, so that t = Rᵀx for a spectrum that was not deflated.
 *
 * @param weights A × channels
 * @param loadings A × channels
 * @returns A × channels
 * @throws FitError when PᵀW cannot be inverted
 */
export function rotationsOf(weights: readonly Float64Array[], loadings: readonly Float64Array[]): Float64Array[] {
  const A = weights.length;
  if (A === 0) return [];
  const inner = new Matrix(A, A);
  for (let a = 0; a < A; a++) {
    for (let b = 0; b < A; b++) inner.set(a, b, dot(loadings[a], weights[b]));
  }
  const turned = inverseOf(inner);
  return weights.map((_, a) => {
    const rotation = new Float64Array(weights[0].length);
    for (let b = 0; b < A; b++) {
      const share = turned.get(b, a);
      for (let j = 0; j < rotation.length; j++) rotation[j] += share * weights[b][j];
    }
    return rotation;
  });
}

function inverseOf(inner: Matrix): Matrix {
  let found: Matrix | undefined;
  try {
    found = inverse(inner);
  } catch {
    // singular to the last digit; nearly singular comes out as numbers without end
  }
  if (found?.to1DArray().every(Number.isFinite)) return found;
  throw new FitError("PᵀW of the weights and loadings", {
    got: "singular",
    expected: "weights and loadings of one and the same model, no component twice",
    todo: "Check the model's matrices.",
  });
}

/**
 * B = R Qᵀ in units of the (scaled) y: properties × channels.
 *
 * @param upTo how many components to use; PLS components are nested
 */
export function coefficientsOf(
  rotations: readonly Float64Array[],
  yLoadings: readonly ArrayLike<number>[],
  upTo = rotations.length,
): Float64Array[] {
  const m = yLoadings[0].length;
  return Array.from({ length: m }, (_, k) => {
    const b = new Float64Array(rotations[0].length);
    for (let a = 0; a < upTo; a++) for (let j = 0; j < b.length; j++) b[j] += yLoadings[a][k] * rotations[a][j];
    return b;
  });
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let j = 0; j < a.length; j++) sum += a[j] * b[j];
  return sum;
}
