import type { PlantProperty, ReadingView } from "../../core/messages/index.ts";
import type { PanelPicture } from "../charts/panel-picture.ts";

export type PropertyName = Pick<PlantProperty, "name" | "unit">;

/** A column in ascending order of the axis, whichever way the axis runs. */
function inOrder<T>(axis: readonly number[], column: readonly T[]): T[] {
  return axis[0] > axis[axis.length - 1] ? [...column].reverse() : [...column];
}

/**
 * The panels of a reading, from what came in to why it was judged so and what made its numbers. Pure.
 *
 * @param property whose prediction is taken apart
 */
export function readingPanels(reading: ReadingView, { name, unit: of }: PropertyName): PanelPicture[] {
  const { axis, spectrum, calibration, explanation } = reading;
  const { unit } = axis;
  const panels: PanelPicture[] = [];
  const received = (column: readonly number[]) => inOrder(axis.points, column);
  const points = inOrder(axis.points, axis.points);
  if (spectrum) {
    panels.push({
      title: "Spectrum as it came, absorbance",
      axis: points,
      unit,
      lines: [
        ...(calibration
          ? [{ label: "cal. mean", values: received(calibration.mean), manner: "calibration" as const }]
          : []),
        { label: "reading", values: inOrder(axis.points, spectrum), manner: "reading" },
      ],
      range: calibration
        ? { low: received(calibration.low), high: received(calibration.high), label: "cal. range" }
        : undefined,
    });
  }
  if (!explanation) return panels;
  const scored = (column: readonly number[]) => inOrder(explanation.axis, column);
  const channels = scored(explanation.axis);
  panels.push(
    {
      title: "After the model's steps",
      axis: channels,
      unit,
      lines: [
        { label: "model", values: scored(explanation.reconstructed), manner: "model" },
        { label: "reading", values: scored(explanation.preprocessed), manner: "reading" },
      ],
    },
    {
      title: "What the model cannot explain (residual)",
      axis: channels,
      unit,
      lines: [],
      bars: { values: scored(explanation.residual), colour: "quiet", label: "residual" },
    },
    {
      title: explanation.slopes
        ? "What makes Q (after a derivative: up where the spectrum climbs more than the model explains)"
        : "What makes Q (up: more absorption than the model explains; down: less)",
      axis: channels,
      unit,
      lines: [],
      bars: { values: scored(explanation.q), colour: "odd", label: "part of Q" },
      regions: explanation.qRegions,
    },
    {
      title: "What makes T²",
      axis: channels,
      unit,
      lines: [],
      bars: { values: scored(explanation.t2), colour: "far", label: "part of T²" },
      regions: explanation.t2Regions,
    },
  );
  const prediction = explanation.predictions.find((each) => each.name === name);
  if (prediction) {
    panels.push({
      title: `What makes ${name}, ${of} (together its distance from the calibration's mean)`,
      axis: channels,
      unit,
      lines: [],
      bars: { values: scored(prediction.contributions), colour: "quiet", label: "part" },
      regions: prediction.regions,
    });
  }
  return panels;
}
