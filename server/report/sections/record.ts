import { modelId } from "../../../core/model/index.ts";
import { axisFromSpec, describeAxis, writeSteps } from "../../../core/spectrum/index.ts";
import { figure } from "../html.ts";
import { escapeText } from "../plot.ts";
import type { ReportInput } from "../report-input.ts";

export function record({ model }: ReportInput): string {
  const { samples, crossValidation, properties } = model;
  const excluded = samples.excluded.map(({ name, reason }) => name + (reason ? ` (${reason})` : "")).join(", ");
  const entries: [string, string][] = [
    ["model", `${model.name}, SHA-256 ${modelId(model)}`],
    ["made", model.created],
    [
      "properties",
      properties
        .map(({ name, unit, range }) => `${name}${unit && ` [${unit}]`}, ${figure(range[0])} to ${figure(range[1])}`)
        .join("; "),
    ],
    ["axis", describeAxis(axisFromSpec(model.axis))],
    ["steps", writeSteps(model.steps)],
    ["components", String(model.components)],
    [
      "y",
      properties.some(({ deviation }) => deviation !== 1) ? "each divided by its standard deviation" : "not scaled",
    ],
    [
      "validation",
      `${crossValidation!.method}, ${crossValidation!.segments} segments; every step and the model refitted in each`,
    ],
    ["excluded by hand", excluded || "none"],
    [
      "uncertainty of a prediction",
      "± t(0.975; n − A − 1) · SEC · √(1 + h), h = 1/n + T²/(n − 1); the form of ASTM E1655. None is given for a reading that is not inside",
    ],
    ["method", "PLS by NIPALS deflation (Wold, Sjöström & Eriksson 2001)"],
    ...(model.notes ? ([["notes", model.notes]] as [string, string][]) : []),
  ];
  return `<h2>Record</h2>
<dl>${entries.map(([term, text]) => `<dt>${term}</dt><dd>${escapeText(text)}</dd>`).join("")}</dl>
<p class="quiet">Made by Millrace. Advisory: not a safety function, and no replacement of licensed practice or the site's own procedures.</p>`;
}
