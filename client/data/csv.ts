import type { PlantProperty, ReadingView } from "../../core/messages/index.ts";
import { onlyInside, verdictsOfMask } from "../../core/messages/index.ts";
import { type CsvCell as Cell, csvOf } from "../../core/words/index.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { firstAtOrAfter, type HeldTrend } from "./trend-columns.ts";

export { csvOf };

/**
 * The entries of a trend within [from, to] as a table. What was not inside says so in its row, and carries no uncertainty there either.
 */
export function trendCsv(
  trend: HeldTrend,
  properties: readonly Pick<PlantProperty, "name" | "unit">[],
  { from, to, time }: { from: number; to: number; time: PlantTime },
): string {
  const header = [
    "time (UTC)",
    `time (${time.zone})`,
    "readings",
    ...properties.flatMap(({ name, unit }) => [
      `${name} (${unit})`,
      `${name} uncertainty (${unit})`,
      `${name} lowest (${unit})`,
      `${name} highest (${unit})`,
    ]),
    "verdict",
    "largest T2 ratio",
    "largest Q ratio",
  ];
  const rows: Cell[][] = [header];
  for (let index = firstAtOrAfter(trend.time, from); index < trend.time.length && trend.time[index] <= to; index++) {
    const at = trend.time[index];
    rows.push([
      new Date(at).toISOString(),
      time.full(at),
      trend.count[index],
      ...properties.flatMap(({ name }) => {
        const { mean, min, max, uncertainty } = trend.properties[name];
        return [mean[index], onlyInside(trend.verdict[index]) ? uncertainty[index] : null, min[index], max[index]];
      }),
      verdictsOfMask(trend.verdict[index]).join(" "),
      trend.t2.max[index],
      trend.q.max[index],
    ]);
  }
  return csvOf(rows);
}

/** A reading channel by channel: as it came, the calibration, and what the model makes of it. The model may see fewer channels. */
export function readingCsv({ axis, spectrum, calibration, explanation }: ReadingView): string {
  const seen = new Map((explanation?.axis ?? []).map((point, index) => [point, index]));
  const rows: Cell[][] = [
    [
      `axis (${axis.unit})`,
      "reading",
      "calibration mean",
      "calibration lowest",
      "calibration highest",
      "after the steps",
      "reconstructed",
      "residual",
      "part of T2",
      "part of Q (signed)",
      ...(explanation?.predictions ?? []).map(({ name }) => `part of ${name}`),
    ],
  ];
  axis.points.forEach((point, index) => {
    const channel = seen.get(point);
    const modelled = (column: readonly number[] | undefined) => (channel === undefined ? null : column?.[channel]);
    rows.push([
      point,
      spectrum?.[index],
      calibration?.mean[index],
      calibration?.low[index],
      calibration?.high[index],
      modelled(explanation?.preprocessed),
      modelled(explanation?.reconstructed),
      modelled(explanation?.residual),
      modelled(explanation?.t2),
      modelled(explanation?.q),
      ...(explanation?.predictions ?? []).map(({ contributions }) => modelled(contributions)),
    ]);
  });
  return csvOf(rows);
}
