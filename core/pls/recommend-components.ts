/** RMSECV by number of components, from 0: √(PRESS/n) of one property. @param predicted by number of components, n values each */
export function rmsecvOf(predicted: readonly ArrayLike<number>[], reference: ArrayLike<number>): number[] {
  return predicted.map((values) => {
    let sum = 0;
    for (let i = 0; i < reference.length; i++) sum += (values[i] - reference[i]) ** 2;
    return Math.sqrt(sum / reference.length);
  });
}

export interface Recommendation {
  components: number;
  /** where the cross-validated error is least */
  leastAt: number;
  /** the mean squared error that the recommended model had to stay within: least + its standard error */
  threshold: number;
  /** why, in words that follow the number */
  says: string;
}

/**
 * Recommends a number of components by the one-standard-error rule: the fewest whose mean squared cross-validated error is no greater than the
 * least one plus its standard error. With several properties the squared errors are divided by the property's variance and averaged.
 * It is advice: the curve, the inner relations and what is known of the spectra have a say as well.
 *
 * @param predicted by number of components from 0: n × m each
 * @param reference n × m
 * @returns at least 1 component
 *
 * Source: Hastie, Tibshirani & Friedman, The Elements of Statistical Learning, 2nd ed., §7.10 (from memory); standard error = s/√n of the n
 * squared errors at the least, as R's pls does in selectNcomp with method "onesigma" (from memory).
 */
export function recommendComponents(
  predicted: readonly (readonly Float64Array[])[],
  reference: readonly Float64Array[],
): Recommendation {
  const n = reference.length;
  const variances = Array.from(reference[0], (_, k) => {
    const mean = reference.reduce((sum, row) => sum + row[k], 0) / n;
    return reference.reduce((sum, row) => sum + (row[k] - mean) ** 2, 0) / (n - 1);
  });
  const errorsAt = predicted.map((rows) =>
    reference.map((row, i) => {
      let sum = 0;
      for (let k = 0; k < row.length; k++) sum += (rows[i][k] - row[k]) ** 2 / variances[k];
      return sum / row.length;
    }),
  );
  const means = errorsAt.map((errors) => errors.reduce((sum, error) => sum + error, 0) / n);
  let leastAt = Math.min(1, means.length - 1);
  for (let a = leastAt; a < means.length; a++) if (means[a] < means[leastAt]) leastAt = a;
  const spread = errorsAt[leastAt].reduce((sum, error) => sum + (error - means[leastAt]) ** 2, 0) / (n - 1);
  const threshold = means[leastAt] + Math.sqrt(spread / n);
  const components = Math.max(
    1,
    means.findIndex((mean, a) => a >= 1 && mean <= threshold),
  );
  const says =
    components === leastAt
      ? "the least cross-validated error, and no smaller model comes within one standard error of it"
      : `the smallest model within one standard error of the least cross-validated error, which ${leastAt} components have`;
  return { components, leastAt, threshold, says };
}
