import { css } from "lit";
import uPlot from "uplot";
import type { Verdict } from "../../core/messages/index.ts";
import { verdictColour } from "../parts/verdict-mark.ts";
import { chartFont, scaledFont } from "./canvas-text.ts";
import type { Colours } from "./colours.ts";
import { type Ground, StillChart } from "./still-chart.ts";

export interface PlacePicture {
  /** ratios to the limits: of the calibration samples, and of the reading */
  samples: readonly { t2: number; q: number }[];
  reading: { t2: number; q: number; verdict: Verdict };
}

const lowest = 0.01;

/** Decades that hold everything, the limit always among them: exponents of ten. */
export function decades(values: readonly number[]): [number, number] {
  const logs = values.filter((value) => value > 0).map((value) => Math.log10(Math.max(lowest, value)));
  return [Math.min(-1, Math.floor(Math.min(...logs))), Math.max(1, Math.ceil(Math.max(...logs)))];
}

/** The reading among the calibration samples: T² ratio to the right, Q ratio upward, both on log scales whose 1 is the limit. */
export class PlaceMap extends StillChart {
  static override properties = { ...StillChart.properties, picture: { attribute: false } };
  declare picture: PlacePicture;

  static override styles = [
    ...StillChart.styles,
    css`
      :host {
        height: 300px;
      }
    `,
  ];

  protected override draw({ width, height, root, colours }: Ground): uPlot | undefined {
    if (!this.picture) return undefined;
    const { samples, reading } = this.picture;
    const x = decades([...samples.map(({ t2 }) => t2), reading.t2]);
    const y = decades([...samples.map(({ q }) => q), reading.q]);
    const whole = ([low, high]: [number, number]) => Array.from({ length: high - low + 1 }, (_, index) => low + index);
    const axis = { font: chartFont, labelFont: chartFont, stroke: colours.quiet, labelSize: 18, labelGap: 0, gap: 8 };
    const lines = { show: true, stroke: colours.rule, width: 1 };
    const numbers = (_: uPlot, splits: number[]) =>
      splits.map((exponent) => String(Number((10 ** exponent).toPrecision(1))));
    return new uPlot(
      {
        width,
        height,
        padding: [8, 12, 0, 0],
        legend: { show: false },
        cursor: { show: false },
        scales: { x: { time: false, range: () => x }, y: { range: () => y } },
        series: [{}, { paths: () => null, points: { show: false } }],
        axes: [
          {
            ...axis,
            size: 24,
            label: "T² ratio",
            grid: lines,
            ticks: { show: false },
            splits: () => whole(x),
            values: numbers,
          },
          {
            ...axis,
            size: 40,
            label: "Q ratio",
            grid: lines,
            ticks: { show: false },
            splits: () => whole(y),
            values: numbers,
          },
        ],
        hooks: { draw: [(u) => drawPlaces(u, this.picture, colours)] },
      },
      [
        [x[0], x[1]],
        [null, null],
      ],
      root,
    );
  }
}

function drawPlaces(u: uPlot, { samples, reading }: PlacePicture, colours: Colours): void {
  const { ctx, bbox } = u;
  const px = uPlot.pxRatio;
  const spot = ({ t2, q }: { t2: number; q: number }): [number, number] => [
    u.valToPos(Math.log10(Math.max(lowest, t2)), "x", true),
    u.valToPos(Math.log10(Math.max(lowest, q)), "y", true),
  ];
  const [oneX, oneY] = spot({ t2: 1, q: 1 });
  ctx.strokeStyle = colours.quiet;
  ctx.lineWidth = px;
  ctx.beginPath();
  ctx.moveTo(oneX, bbox.top);
  ctx.lineTo(oneX, bbox.top + bbox.height);
  ctx.moveTo(bbox.left, oneY);
  ctx.lineTo(bbox.left + bbox.width, oneY);
  ctx.stroke();
  ctx.font = scaledFont(px);
  ctx.textBaseline = "top";
  ctx.fillStyle = colours.odd;
  ctx.textAlign = "left";
  ctx.fillText("unfamiliar", bbox.left + 6 * px, bbox.top + 5 * px);
  ctx.fillStyle = colours.far;
  ctx.textBaseline = "bottom";
  ctx.textAlign = "right";
  ctx.fillText("extrapolated", bbox.left + bbox.width - 4 * px, bbox.top + bbox.height - 4 * px);
  ctx.fillStyle = colours.quiet;
  ctx.textAlign = "left";
  ctx.textBaseline = "top";
  ctx.fillText("inside", bbox.left + 6 * px, oneY + 4 * px);
  ctx.strokeStyle = colours.quiet;
  ctx.lineWidth = px;
  for (const sample of samples) {
    const [x, y] = spot(sample);
    ctx.beginPath();
    ctx.arc(x, y, 2.6 * px, 0, 2 * Math.PI);
    ctx.stroke();
  }
  const [x, y] = spot(reading);
  const colour = colours[verdictColour[reading.verdict].slice(2) as keyof Colours];
  ctx.strokeStyle = colour;
  ctx.fillStyle = colour;
  ctx.lineWidth = 1.6 * px;
  ctx.beginPath();
  ctx.arc(x, y, 5 * px, 0, 2 * Math.PI);
  ctx.fill();
  ctx.beginPath();
  ctx.arc(x, y, 9 * px, 0, 2 * Math.PI);
  ctx.stroke();
}
customElements.define("mill-place-map", PlaceMap);
