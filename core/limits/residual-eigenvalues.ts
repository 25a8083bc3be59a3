import { symmetricEigen } from "./symmetric-eigen.ts";

/**
 * Eigenvalues of EᵀE/(n − 1), largest first, without those that are zero but for rounding: from the n × n side, EEᵀ. Unit: that of the
 * residuals, squared.
 *
 * @param residuals E: n × channels
 */
export function residualEigenvalues(residuals: readonly Float64Array[]): number[] {
  const n = residuals.length;
  const gram = residuals.map(() => new Float64Array(n));
  for (let i = 0; i < n; i++) {
    for (let k = 0; k <= i; k++) {
      let sum = 0;
      for (let j = 0; j < residuals[0].length; j++) sum += residuals[i][j] * residuals[k][j];
      gram[i][k] = sum / (n - 1);
      gram[k][i] = gram[i][k];
    }
  }
  const { values } = symmetricEigen(gram);
  return values.filter((value) => value > 1e-14 * values[0]);
}
