/**
 * Standard error of each regression coefficient by the jack-knife over the segments of the cross-validation:
 *
 *     s²(b_j) = (g − 1)/g · Σ_i (b_j(−i) − b_j)²
 *
 * b(−i) is fitted without segment i, b on all; g segments. Channels whose b is smaller than about twice its error say little.
 *
 * @param full b: channels
 * @param segments g × channels
 *
 * Source: Martens & Martens, Food Qual. Prefer. 11 (2000) 5 (from memory), with b of the full model as centre.
 */
export function jackKnifeError(full: ArrayLike<number>, segments: readonly ArrayLike<number>[]): Float64Array {
  const g = segments.length;
  return Float64Array.from({ length: full.length }, (_, j) => {
    let sum = 0;
    for (const b of segments) sum += (b[j] - full[j]) ** 2;
    return Math.sqrt(((g - 1) / g) * sum);
  });
}
