import {
  boxLimit,
  boxMomentsLimit,
  empiricalQuantile,
  jacksonMudholkarLimit,
  LimitError,
  t2Limit,
} from "../../../core/limits/index.ts";
import { figure, table } from "../html.ts";
import { escapeText } from "../plot.ts";
import type { ReportInput } from "../report-input.ts";

export function limits({ model, limits: inForce, choice, confidence, diagnostics }: ReportInput): string {
  const odd = diagnostics.samples.filter(({ suspicions }) => suspicions.some(({ kind }) => kind === "odd spectrum"));
  const t2Of = (method: "f" | "beta" | "chi-squared" | "largest") =>
    attempt(() => t2Limit(model, method === "largest" ? { method } : { method, confidence }));
  const { fit, crossValidated } = model.residuals!;
  const held = crossValidated!;
  const beyond = (values: readonly number[], limit: number | undefined) =>
    limit === undefined ? "–" : `${values.filter((value) => value > limit).length} of ${values.length}`;
  const qRows = (residuals: { q: number[]; eigenvalues: number[] }, from: string) =>
    [
      ["Box, by moments", attempt(() => boxMomentsLimit(residuals.q, confidence))],
      ["Box, by eigenvalues", attempt(() => boxLimit(residuals.eigenvalues, confidence))],
      ["Jackson & Mudholkar", attempt(() => jacksonMudholkarLimit(residuals.eigenvalues, confidence))],
      ["empirical", attempt(() => empiricalQuantile(residuals.q, confidence))],
    ].map(([name, limit]) => [
      `Q, ${name}, ${from}`,
      figure(limit as number | undefined),
      beyond(held.q, limit as number | undefined),
    ]);
  const t2Rows = (
    [
      ["F, for new readings", t2Of("f")],
      ["beta, for the calibration samples", t2Of("beta")],
      ["χ², for many samples", t2Of("chi-squared")],
      ["largest in the calibration", t2Of("largest")],
    ] as const
  ).map(([name, limit]) => [`T², ${name}`, figure(limit), beyond(held.t2, limit)]);
  const qChoice = "residuals" in choice.q ? `${choice.q.method}, ${choice.q.residuals} residuals` : "a fixed number";
  return `<h2>Limits</h2>
<p>In force by default at ${confidence * 100} %: T² ${figure(inForce.t2)} (${choice.t2.method.toUpperCase()}), Q ${figure(inForce.q)} (${qChoice}), nearest sample ${figure(inForce.nearest)} (the largest gap within the calibration). Residuals of the fit are smaller than those of new readings, so limits made from them flag far too many. A calibration that is spread evenly over its range makes the F limit of T² too wide: here it is ${figure(t2Of("f")! / t2Of("largest")!, 3)} times the largest T² seen.</p>
${odd.length === 0 ? "" : `<p class="mind"><b>Mind:</b> ${escapeText(odd.map(({ name }) => name).join(", "))} ${odd.length === 1 ? "has an odd spectrum" : "have odd spectra"} and widen${odd.length === 1 ? "s" : ""} the limits of Q. Decide about ${odd.length === 1 ? "it" : "them"} before these limits are relied on.</p>`}
${table(["limit", "value", "held-out samples beyond it"], [...t2Rows, ...qRows(held, "cross-validated residuals"), ...qRows(fit, "residuals of the fit")])}
<p class="quiet">Tracy, Young & Mason 1992 (T²) · Jackson & Mudholkar 1979 · Box 1954 · Nomikos & MacGregor 1995 (moments). An empirical ${confidence * 100} % point wants about ${Math.round(10 / (1 - confidence))} samples.</p>`;
}

function attempt(work: () => number): number | undefined {
  try {
    return work();
  } catch (error) {
    if (error instanceof LimitError) return undefined;
    throw error;
  }
}
