import { CholeskyDecomposition, Matrix } from "ml-matrix";
import { LimitError } from "./limit-error.ts";

/**
 * The calibration samples in the space of their scores, turned so that distance is plain: with S = L Lᵀ, z = L⁻¹ t gives T² = ‖z‖².
 * Scores of another origin need not be orthogonal, so S is taken whole.
 */
export interface ScoreSpace {
  n: number;
  components: number;
  /** L⁻¹, lower triangle, row after row: A × A */
  whiten: Float64Array;
  /** z of the calibration samples, sample after sample: n × A */
  places: Float64Array;
}

/**
 * @param scores n × A calibration scores with mean zero
 * @throws LimitError when there are too few samples for a covariance, or a component does not vary or repeats others
 *
 * S = TᵀT/(n − 1).
 */
export function scoreSpaceOf(scores: readonly ArrayLike<number>[]): ScoreSpace {
  const n = scores.length;
  const A = scores[0].length;
  const covariance = new Matrix(A, A);
  for (let a = 0; a < A; a++) {
    for (let b = 0; b <= a; b++) {
      let sum = 0;
      for (let i = 0; i < n; i++) sum += scores[i][a] * scores[i][b];
      covariance.set(a, b, sum / (n - 1));
      covariance.set(b, a, sum / (n - 1));
    }
  }
  const cholesky = new CholeskyDecomposition(covariance);
  if (!cholesky.isPositiveDefinite()) {
    throw new LimitError("the covariance of the calibration scores", {
      got: "singular",
      expected: "as many independent columns as components",
      todo: "Take fewer components.",
    });
  }
  const whiten = inverseOfLower(cholesky.lowerTriangularMatrix);
  const places = new Float64Array(n * A);
  for (let i = 0; i < n; i++) {
    for (let a = 0; a < A; a++) {
      let sum = 0;
      for (let b = 0; b <= a; b++) sum += whiten[a * A + b] * scores[i][b];
      places[i * A + a] = sum;
    }
  }
  return { n, components: A, whiten, places };
}

/** T² of each calibration sample. */
export function calibrationT2({ n, components: A, places }: ScoreSpace): Float64Array {
  return Float64Array.from({ length: n }, (_, i) => {
    let sum = 0;
    for (let a = 0; a < A; a++) sum += places[i * A + a] ** 2;
    return sum;
  });
}

/** Mahalanobis distance of each calibration sample to the nearest of the others. */
export function calibrationNearest({ n, components: A, places }: ScoreSpace): Float64Array {
  return Float64Array.from({ length: n }, (_, i) => {
    let least = Number.POSITIVE_INFINITY;
    for (let other = 0; other < n; other++) {
      if (other === i) continue;
      let sum = 0;
      for (let a = 0; a < A; a++) sum += (places[i * A + a] - places[other * A + a]) ** 2;
      least = Math.min(least, sum);
    }
    return Math.sqrt(least);
  });
}

function inverseOfLower(lower: Matrix): Float64Array {
  const A = lower.rows;
  const out = new Float64Array(A * A);
  for (let column = 0; column < A; column++) {
    for (let row = column; row < A; row++) {
      let sum = row === column ? 1 : 0;
      for (let k = column; k < row; k++) sum -= lower.get(row, k) * out[k * A + column];
      out[row * A + column] = sum / lower.get(row, row);
    }
  }
  return out;
}
