/**
 * Contribution of each channel to T²: c_j = x_j (R S⁻¹ t)_j. They add up to T²; single ones may be negative.
 *
 * @param x spectrum after the steps
 * @param rotations R: A × channels
 * @param inverseTimesScores S⁻¹ t: A
 *
 * Source: Westerhuis, Gurden & Smilde, Chemom. Intell. Lab. Syst. 51 (2000) 95 (from memory). They smear: a fault in one channel shows in
 * others too, so say "differs here", never "caused by". Checked against R: test/reference/gasoline-monitoring.test.ts.
 */
export function t2Contributions(
  x: Float64Array,
  rotations: readonly Float64Array[],
  inverseTimesScores: ArrayLike<number>,
): Float64Array {
  const out = new Float64Array(x.length);
  rotations.forEach((rotation, a) => {
    for (let j = 0; j < x.length; j++) out[j] += x[j] * rotation[j] * inverseTimesScores[a];
  });
  return out;
}

/**
 * Contribution of each channel to Q: e_j², here with the sign of e_j. The absolute values add up to Q.
 *
 * Source: Miller, Swanson & Heckler, Appl. Math. Comput. Sci. 8 (1998) 775 (from memory).
 */
export function qContributions(residual: Float64Array): Float64Array {
  return residual.map((e) => e * Math.abs(e));
}

/** Contribution of each channel to a prediction: x_j b_j. They add up to ŷ − ȳ, unit of the property. */
export function predictionContributions(x: Float64Array, coefficients: ArrayLike<number>): Float64Array {
  return x.map((value, j) => value * coefficients[j]);
}
