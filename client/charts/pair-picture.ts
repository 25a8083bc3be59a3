import type { Agreement } from "../../core/messages/index.ts";

/** A horizontal line of a chart, named at its right end. */
export interface ChartLine {
  value: number;
  label: string;
  manner: "centre" | "limit";
}

/** Points in order of time with lines to judge them by. All columns are as long as `time`. */
export interface PairPicture {
  title: string;
  unit: string;
  time: readonly number[];
  values: readonly (number | null)[];
  /** limits that change from point to point */
  band?: { low: readonly number[]; high: readonly number[] };
  lines: readonly ChartLine[];
  /** indices of points that give a signal: drawn filled, and larger */
  marked: ReadonlySet<number>;
  /** levels of stretches, drawn through their points */
  levels?: readonly { from: number; to: number; value: number }[];
  joined: boolean;
}

/** Difference over time with the levels of its stretches, then the control charts where there are enough pairs. Pure. */
export function pairPictures({ pairs, charts, finding, odd, unit }: Agreement): PairPicture[] {
  const { time } = pairs;
  const errors = pairs.predicted.map((value, i) => value - pairs.laboratory[i]);
  const marked = (chart: string) => new Set(charts?.signals.filter((s) => s.chart === chart).map(({ index }) => index));
  const individuals = marked("individuals");
  if (odd) individuals.add(odd.index);
  const difference: PairPicture = {
    title: "Predicted − laboratory, pair by pair (individuals)",
    unit,
    time,
    values: errors,
    lines: [
      { value: 0, label: "agreement", manner: "centre" },
      ...(charts
        ? [
            { value: charts.individuals.high, label: "centre + 3 σ", manner: "limit" as const },
            { value: charts.individuals.low, label: "centre − 3 σ", manner: "limit" as const },
          ]
        : []),
    ],
    marked: individuals,
    levels: finding.stretches.map(({ from, to, bias }) => ({ from, to, value: bias.value })),
    joined: false,
  };
  if (!charts) return [difference];
  const { centre } = charts.individuals;
  return [
    difference,
    {
      title: "Smoothed (EWMA)",
      unit,
      time,
      values: charts.ewma.z,
      band: charts.ewma,
      lines: [{ value: centre, label: "centre", manner: "centre" }],
      marked: marked("EWMA"),
      joined: true,
    },
    {
      title: "From one pair to the next (moving range)",
      unit,
      time,
      values: charts.movingRanges,
      lines: [{ value: charts.movingRangeHigh, label: "limit", manner: "limit" }],
      marked: marked("moving range"),
      joined: true,
    },
  ];
}

/** What a picture has to show, with a little room; a moving range always from 0. */
export function pairRange({ values, band, lines }: PairPicture): [number, number] {
  const all = [
    ...values.filter((value) => value !== null),
    ...(band ? [...band.low, ...band.high] : []),
    ...lines.map(({ value }) => value),
  ];
  const [low, high] = [Math.min(...all), Math.max(...all)];
  const room = (high - low || 1) * 0.08;
  return [low - room, high + room];
}
