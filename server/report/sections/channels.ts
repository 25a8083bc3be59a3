import { axisAfterSteps, axisFromSpec, writeSteps } from "../../../core/spectrum/index.ts";
import { bandPicture, coefficientPicture, curvePicture, vipPicture } from "../channel-pictures.ts";
import { card } from "../html.ts";
import type { Plot } from "../plot.ts";
import { escapeText } from "../plot.ts";
import type { ReportInput } from "../report-input.ts";

export function channels({ calibration, diagnostics, model }: ReportInput): string {
  const axis = axisAfterSteps(model.steps, axisFromSpec(model.axis));
  const { weights, loadings } = calibration.fit;
  return `<h2>The channels</h2>
<p>Steps before the model: ${escapeText(writeSteps(model.steps))}. Below the first picture everything is drawn on the spectra after these steps.</p>
<div class="cards">
${card("Calibration spectra as measured", bandPicture(calibration), "Line: mean. Grey: from the smallest to the largest value.", true)}
${diagnostics.coefficients.map((one) => card(`Regression coefficients of ${one.name}`, coefficientPicture(axis, one), "Grey: ± two standard errors by jack-knife over the validation's segments. Where the grey touches zero the channel says little.", true)).join("")}
${card("Importance of the channels (VIP)", vipPicture(axis, diagnostics.vip), "The mean of VIP² is 1: above 1 a channel matters more than the average. It ranks, and is no test.", true)}
${stacked(
  "Weights",
  "What each component looks for in the spectrum.",
  weights.map((w, a) => curvePicture(`Weights of component ${a + 1}`, axis, w, `w${a + 1}`)),
)}
${stacked(
  "Loadings",
  "How the spectrum changes with each component. Smooth bands are chemistry, fringes and steps the instrument, grass is noise.",
  loadings.map((p, a) => curvePicture(`Loadings of component ${a + 1}`, axis, p, `p${a + 1}`)),
)}
</div>`;
}

function stacked(title: string, reads: string, plots: readonly Plot[]): string {
  return plots.map((plot, a) => card(`${title}, component ${a + 1}`, plot, a === 0 ? reads : "", true)).join("");
}
