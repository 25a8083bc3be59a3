/** Where a ratio stands in a strip of the trust ribbon: log scale from 0.1 (0) over 1, the limit (0.5), to 10 (1); beyond is cut off. */
export function ratioPlace(ratio: number): number {
  if (!(ratio > 0)) return 0;
  return (Math.max(-1, Math.min(1, Math.log10(ratio))) + 1) / 2;
}
