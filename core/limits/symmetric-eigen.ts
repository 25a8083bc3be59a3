import { EigenvalueDecomposition, Matrix } from "ml-matrix";

/**
 * Eigenvalues of a symmetric matrix, largest first, with their vectors (unit length, one an eigenvalue).
 *
 * The matrix is divided by its trace, and what is below 1e-30 of that is taken as zero: ml-matrix's reduction turns numbers whose squares
 * underflow into NaN.
 *
 * @param rows symmetric, not negative definite
 * @returns no values and vectors for a matrix of zeros
 */
export function symmetricEigen(rows: readonly ArrayLike<number>[]): { values: number[]; vectors: number[][] } {
  const trace = rows.reduce((sum, row, i) => sum + row[i], 0);
  if (!(trace > 0)) return { values: [], vectors: [] };
  const scaled = rows.map((row) => Array.from(row, (value) => (Math.abs(value) > 1e-30 * trace ? value / trace : 0)));
  const { realEigenvalues, eigenvectorMatrix } = new EigenvalueDecomposition(new Matrix(scaled), {
    assumeSymmetric: true,
  });
  const order = realEigenvalues.map((_, k) => k).sort((a, b) => realEigenvalues[b] - realEigenvalues[a]);
  return {
    values: order.map((k) => realEigenvalues[k] * trace),
    vectors: order.map((k) => eigenvectorMatrix.getColumn(k)),
  };
}
