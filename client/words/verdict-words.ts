import type { Judged, Verdict } from "../../core/messages/index.ts";
import { ratio } from "./quantity.ts";

/** What each verdict means for the person who reads the number. */
export const verdictMeaning: Record<Verdict, string> = {
  inside: "The calibration covers this spectrum: the number may be believed within its uncertainty.",
  sparse: "No calibration sample is near: the number is less sure than it looks.",
  extrapolated: "Known ingredients in amounts outside the calibration: the number is a direction, not an amount.",
  unfamiliar: "Something in the spectrum that the calibration never saw: do not use the number.",
  unusable: "Not a valid spectrum: there is no number.",
};

/** The technical term with its figure, for an engineer: "Q 3.4 × limit". Empty for inside and unusable. */
export function evidence(judged: Judged): string {
  const { t2, q, nearest } = judged.ratios;
  switch (judged.verdict[0]) {
    case "unfamiliar":
      return `Q ${ratio(q)} × limit`;
    case "extrapolated":
      return `T² ${ratio(t2)} × limit`;
    case "sparse":
      return `nearest sample ${ratio(nearest)} × limit`;
    default:
      return "";
  }
}

/** Kinds of excursion that are verdicts get their mark; a property alarm's key does not. */
export function verdictOfKind(kind: string): Verdict | undefined {
  return kind in verdictMeaning ? (kind as Verdict) : undefined;
}
