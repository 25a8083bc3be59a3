import { pWords } from "../../core/agreement/index.ts";
import type { InnerPlace } from "../../core/messages/index.ts";
import { counted } from "./quantity.ts";

/** What the pairs do in one component of the inner relation. */
export function innerWords({ pairs, odd, shift, shifted, bend, bent }: InnerPlace): string {
  if (pairs.t.length === 0) return "No pair has its scores: their spectra are not kept.";
  const apart =
    odd.length === 0
      ? "Every pair keeps to the relation."
      : `${counted(odd.length, "pair")} of ${pairs.t.length} ${odd.length === 1 ? "is" : "are"} odd here: spectrum and value do not go together.`;
  return [
    apart,
    ...(shifted && shift ? [`Shifted: the pairs lie beside the calibration's line (p ${pWords(shift.p)}).`] : []),
    ...(bent && bend ? [`Bent: what is left goes with t² (p ${pWords(bend.p)}).`] : []),
  ].join(" ");
}
