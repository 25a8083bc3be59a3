import { axisAfterSteps, axisFromSpec } from "../../../core/spectrum/index.ts";
import { card, figure, table } from "../html.ts";
import { looksOf } from "../look-of-sample.ts";
import type { ReportInput } from "../report-input.ts";
import { biplotPicture, influencePicture, leverageErrorPicture, scorePicture } from "../sample-pictures.ts";

export function samples({ calibration, diagnostics, limits: limit, confidence, model }: ReportInput): string {
  const looks = looksOf(diagnostics);
  const pairs: [number, number][] = model.components > 1 ? [[0, 1]] : [];
  if (model.components > 2) pairs.push([0, 2]);
  const suspects = diagnostics.samples.filter(({ suspicions }) => suspicions.length > 0);
  const axis = axisAfterSteps(model.steps, axisFromSpec(model.axis));
  return `<h2>The samples</h2>
<p>${
    suspects.length === 0
      ? "No sample stands out."
      : `${suspects.length} of ${diagnostics.samples.length} sample${suspects.length === 1 ? " stands out and should be looked at by a person. It was not" : "s stand out and should be looked at by a person. None was"} removed: an extreme sample may be the most valuable one, a wrong reference value the most harmful.`
  } At these thresholds about one healthy sample in a hundred stands out by chance in each test.</p>
${
  suspects.length === 0
    ? ""
    : table(
        [
          "sample",
          "leverage",
          "T²/limit",
          "Q/limit, fit",
          "Q/limit, held out",
          ...model.properties.map(({ name }) => `error of ${name}, held out`),
          "why",
        ],
        suspects.map(({ name, leverage, t2, q, error, suspicions }) => [
          name,
          figure(leverage, 3),
          figure(t2.fit / limit.t2, 3),
          figure(q.fit / limit.q, 3),
          figure(q.crossValidated / limit.q, 3),
          ...error.map(({ crossValidated }) => figure(crossValidated, 3)),
          suspicions.map(({ kind, says }) => `${kind}: ${says}`).join(" · "),
        ]),
        true,
      )
}
<div class="cards">${pairs
    .map((pair) =>
      card(
        `Score map, components ${pair[0] + 1} and ${pair[1] + 1}`,
        scorePicture(calibration, pair, looks, confidence),
        `Near samples have like spectra. Broken line: ${confidence * 100} % limit of T² of these two components for new readings.`,
      ),
    )
    .join("")}
${card("Influence: T² and Q", influencePicture(diagnostics, limit), "Hollow: in the fit. Filled: held out. Right: an extreme sample of the known kind. Up: something in the spectrum that the others do not show. Both: look at the instrument first.")}
${model.properties.map(({ name }, k) => card(`Influence: leverage and error of ${name}`, leverageErrorPicture(calibration, diagnostics, k), "A long line from hollow (fit) to filled (held out): the model depends on this sample.")).join("")}
${model.components > 1 ? card("Samples and channels together (biplot)", biplotPicture(calibration, [0, 1], axis.points), "Dots: samples. Line: the channels in order, named where they weigh most. Samples lie in the direction of channels in which they are high.") : ""}</div>
`;
}
