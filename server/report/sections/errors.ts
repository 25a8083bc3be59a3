import { type ErrorStatistics, errorStatistics } from "../../../core/pls/index.ts";
import { card, figure, table } from "../html.ts";
import { looksOf } from "../look-of-sample.ts";
import { escapeText } from "../plot.ts";
import { errorPicture, predictionPicture, type TestSet } from "../prediction-picture.ts";
import type { ReportInput } from "../report-input.ts";

export function errors({ calibration, diagnostics, test, model }: ReportInput): string {
  const looks = looksOf(diagnostics);
  const rows = model.properties.flatMap(({ name, unit }, k) => {
    const { fit, crossValidated } = diagnostics.errors[k];
    const tested = test && testStatistics(test, k);
    return [
      errorRow(`${name}, fit (RMSEC)`, fit, unit),
      errorRow(`${name}, held out (RMSECV)`, crossValidated, unit),
      ...(tested ? [errorRow(`${name}, test (RMSEP)`, tested, unit)] : []),
    ];
  });
  return `<h2>How well it predicts</h2>
<p>The fit flatters; the held-out line is what to expect of new samples of the same kind${test ? `, and the test line what samples gave that had no part in the calibration (${escapeText(test.file)})` : ""}.</p>
${table(["", "n", "RMS", "bias", "SEP", "slope", "R²", "RPD"], rows)}
<p class="quiet">e = predicted − reference. RMS = √(Σe²/n): RMSEC, RMSECV or RMSEP · bias = mean of e · SEP = √(Σ(e − bias)²/(n − 1)), so RMS² = bias² + SEP²(n − 1)/n · slope of reference on predicted · R² = 1 − Σe²/Σ(y − ȳ)² · RPD = standard deviation of the reference / SEP: it depends on the spread of the set, so look at SEP first.${
    model.properties.some(({ sec }) => sec !== undefined)
      ? ` SEC of ASTM E1655, √(Σe²/(n − A − 1)): ${escapeText(model.properties.map(({ name, sec, unit }) => `${name} ${figure(sec)}${unit && ` ${unit}`}`).join(", "))}.`
      : ""
  }</p>
<div class="cards">${model.properties
    .map(
      ({ name }, k) =>
        card(
          `Predicted against reference: ${name}`,
          predictionPicture(calibration, k, looks, test),
          `Hollow: in the fit. Filled: held out; a line joins the two. ${test ? "Diamonds: test samples. " : ""}Named: samples to look at. On the diagonal predicted equals reference.`,
        ) +
        card(
          `Error over the range: ${name}`,
          errorPicture(calibration, k, looks, test),
          "A bend or a slope tells of a property that is not linear in the spectra; a fan, of an error that grows with the value.",
        ),
    )
    .join("")}</div>`;
}

function errorRow(name: string, { n, rms, bias, sep, slope, r2, rpd }: ErrorStatistics, unit: string): string[] {
  const of = (value: number | undefined) => figure(value) + (unit && value !== undefined ? ` ${unit}` : "");
  const rounding = Math.abs(bias) < 1e-9 * rms; // the fit has none by construction
  return [name, String(n), of(rms), of(rounding ? 0 : bias), of(sep), figure(slope), figure(r2), figure(rpd, 3)];
}

function testStatistics({ y, predicted }: TestSet, k: number): ErrorStatistics | undefined {
  const known = y.map((_, i) => i).filter((i) => Number.isFinite(y[i][k]));
  if (known.length === 0) return undefined;
  return errorStatistics(
    known.map((i) => predicted[i][k]),
    known.map((i) => y[i][k]),
  );
}
