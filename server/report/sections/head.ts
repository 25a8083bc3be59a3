import { modelId } from "../../../core/model/index.ts";
import { figure } from "../html.ts";
import { escapeText } from "../plot.ts";
import type { ReportInput } from "../report-input.ts";

export function head({ model, warnings, calibration }: ReportInput): string {
  const { samples, components, properties } = model;
  const best = properties
    .map(({ name, unit, rmsecv }) => `${name} to ±${figure(rmsecv![components], 2)}${unit && ` ${unit}`}`)
    .join(", ");
  return `<h1>${escapeText(model.name)}</h1>
<p class="quiet">Calibration report · ${model.created.replace("T", " ").replace(/\.\d+Z$/, " UTC")} · model ${modelId(model).slice(0, 12)}</p>
<p class="lead">${samples.names.length} samples, ${model.components} component${components === 1 ? "" : "s"}. Held-out samples are predicted with a typical error (RMSECV) of: ${escapeText(best)}.</p>
<p>The one-standard-error rule recommends ${calibration.recommendation.components}: ${escapeText(calibration.recommendation.says)}.${
    calibration.recommendation.components === components ? "" : ` The model has ${components}, as it was asked for.`
  }</p>
${warnings.map((warning) => `<p class="mind"><b>Mind:</b> ${escapeText(warning)}</p>`).join("\n")}`;
}
