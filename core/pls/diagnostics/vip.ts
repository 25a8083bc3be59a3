/**
 * Variable importance in the projection of each channel:
 *
 *     VIP_j = √( p Σ_a s_a (w_ja / ‖w_a‖)² / Σ_a s_a )      s_a = (qᵀq)_a (tᵀt)_a, the variance of y that component a explains
 *
 * The mean of VIP² is 1, hence the custom to look where it exceeds 1. It ranks channels within one model and is no test.
 *
 * @param weights A × channels
 * @param yLoadings A × properties
 * @param scores n × A
 *
 * Source: Wold, Sjöström & Eriksson 2001; Chong & Jun, Chemom. Intell. Lab. Syst. 78 (2005) 103 (from memory).
 */
export function vip(
  weights: readonly ArrayLike<number>[],
  yLoadings: readonly ArrayLike<number>[],
  scores: readonly ArrayLike<number>[],
): Float64Array {
  const p = weights[0].length;
  const explained = weights.map((_, a) => {
    let qq = 0;
    for (let k = 0; k < yLoadings[a].length; k++) qq += yLoadings[a][k] ** 2;
    let tt = 0;
    for (const row of scores) tt += row[a] ** 2;
    return qq * tt;
  });
  const total = explained.reduce((sum, part) => sum + part, 0);
  return Float64Array.from({ length: p }, (_, j) => {
    let sum = 0;
    weights.forEach((w, a) => {
      sum += explained[a] * w[j] ** 2; // weights have unit length
    });
    return Math.sqrt((p * sum) / total);
  });
}
