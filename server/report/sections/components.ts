import type { InnerRelation } from "../../../core/pls/index.ts";
import { explainedPicture, innerRelationPicture, rmsecvPicture } from "../component-pictures.ts";
import { card, figure } from "../html.ts";
import type { ReportInput } from "../report-input.ts";

export function components({ calibration, diagnostics, model }: ReportInput): string {
  return `<h2>How many components</h2>
<p>Too few leave out what is known; too many describe noise. The error of held-out samples shows where to stop: the fewest components that are not clearly worse than the best.</p>
<div class="cards">${model.properties
    .map(({ name }, k) =>
      card(
        `Error of held-out samples: ${name}`,
        rmsecvPicture(calibration, k),
        "With 0 components every sample is predicted as the mean.",
      ),
    )
    .join("")}
${card("Explained variance", explainedPicture(diagnostics), "Bars: of the spectra. Lines: of each property, in the fit. Cumulative.")}
${diagnostics.innerRelations.map((relation) => card(`Inner relation of component ${relation.component}`, innerRelationPicture(calibration, relation), relationInWords(relation))).join("")}</div>`;
}

function relationInWords({
  correlation,
  crossValidated,
  leastCorrelation,
  empty,
  curvature,
  curvatureLimit,
  bent,
}: InnerRelation): string {
  const relation = empty
    ? `<b>No relation when held out</b> (r = ${figure(crossValidated, 2)}, at least ${figure(leastCorrelation, 2)} would be needed): the component is not worth taking.`
    : `Holds when held out: r = ${figure(crossValidated, 2)} (in the fit ${figure(correlation, 2)}).`;
  const shape = bent
    ? `<b>The relation bends</b> (t of the quadratic term ${figure(curvature, 2)}, limit ±${figure(curvatureLimit, 2)}): the property is not linear in the spectra as they are preprocessed.`
    : `No bend (t of the quadratic term ${figure(curvature, 2)}, limit ±${figure(curvatureLimit, 2)}).`;
  return `${relation} ${shape} Hollow: fit. Filled: held out.`;
}
