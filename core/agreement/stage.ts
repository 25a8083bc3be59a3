import type { Stage } from "../messages/index.ts";

/**
 * Pairs that a judgement asks for: some 15–20 independent ones for the first (probationary, local) one, 30 or more that span level and
 * composition for the general one. ASTM D3764 and D6122 (from memory; the edition in force rules).
 */
export const firstJudgement = 15;
export const fullJudgement = 30;

/** How far an analyzer's pairs allow a judgement. `range`: calibrated range of the property. */
export function stageOf(laboratory: readonly number[], range: readonly [number, number]): Stage {
  const n = laboratory.length;
  const width = range[1] - range[0];
  const spanned = n > 1 ? Math.max(...laboratory) - Math.min(...laboratory) : 0;
  const span = width > 0 ? Math.min(1, spanned / width) : 0;
  if (n < firstJudgement) return { stage: "too few", n, missing: firstJudgement - n, span };
  if (n < fullJudgement) return { stage: "first judgement", n, missing: fullJudgement - n, span };
  return { stage: "full judgement", n, missing: 0, span };
}
