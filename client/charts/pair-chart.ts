import { css } from "lit";
import uPlot from "uplot";
import type { PlantTime } from "../words/plant-time.ts";
import { decimalsOfStep, fixed } from "../words/quantity.ts";
import { chartFont, scaledFont } from "./canvas-text.ts";
import type { Colours } from "./colours.ts";
import { type PairPicture, pairRange } from "./pair-picture.ts";
import { type Ground, StillChart } from "./still-chart.ts";
import { tickLabel, timeStep, timeTicks } from "./time-ticks.ts";
import { spreadLabels, valueStep, valueTicks } from "./value-ticks.ts";

/** Pairs in order of time, with levels, limits and what lies beyond them. */
export class PairChart extends StillChart {
  static override properties = {
    ...StillChart.properties,
    picture: { attribute: false },
    time: { attribute: false },
    domain: { attribute: false },
  };
  declare picture: PairPicture;
  declare time: PlantTime;
  /** first and last moment that all charts of a view show, epoch ms */
  declare domain: [number, number];

  static override styles = [
    ...StillChart.styles,
    css`
      :host {
        height: 150px;
      }
      :host([tall]) {
        height: 230px;
      }
    `,
  ];

  protected override draw({ width, height, root, colours }: Ground): uPlot | undefined {
    if (!this.picture) return undefined;
    const y = pairRange(this.picture);
    const [from, to] = this.domain;
    const stepMs = timeStep(to - from, Math.max(2, width / 110));
    const mostTicks = Math.max(3, Math.floor(height / 34));
    const decimals = decimalsOfStep(valueStep(y[0], y[1], mostTicks));
    const axis = { font: chartFont, stroke: colours.quiet, gap: 4, ticks: { show: false } };
    return new uPlot(
      {
        width,
        height,
        padding: [6, width < 520 ? 76 : 92, 0, 0],
        legend: { show: false },
        cursor: { show: false },
        scales: { x: { time: false, range: () => [from, to] }, y: { range: () => y } },
        series: [{}, { paths: () => null, points: { show: false } }],
        axes: [
          {
            ...axis,
            size: 22,
            grid: { show: true, stroke: colours.rule, width: 1 },
            splits: () => timeTicks(from, to, stepMs, this.time),
            values: (_, splits) => splits.map((at) => tickLabel(at, stepMs, this.time)),
          },
          {
            ...axis,
            size: 56,
            grid: { show: false },
            splits: () => valueTicks(y[0], y[1], mostTicks),
            values: (_, splits) => splits.map((value) => fixed(value, decimals)),
          },
        ],
        hooks: { draw: [(u) => drawPairs(u, this.picture, colours)] },
      },
      [
        [from, to],
        [null, null],
      ],
      root,
    );
  }
}

function drawPairs(u: uPlot, picture: PairPicture, colours: Colours): void {
  const pen: Pen = { u, ctx: u.ctx, px: uPlot.pxRatio, colours };
  drawBand(pen, picture);
  drawLines(pen, picture);
  drawLevels(pen, picture);
  if (picture.joined) drawJoined(pen, picture);
  drawPoints(pen, picture);
}

interface Pen {
  u: uPlot;
  ctx: CanvasRenderingContext2D;
  px: number;
  colours: Colours;
}
const x = ({ u }: Pen, at: number) => u.valToPos(at, "x", true);
const y = ({ u }: Pen, value: number) => u.valToPos(value, "y", true);

function drawBand(pen: Pen, { band, time }: PairPicture): void {
  if (!band || time.length === 0) return;
  const { ctx } = pen;
  ctx.beginPath();
  for (let i = 0; i < time.length; i++) ctx.lineTo(x(pen, time[i]), y(pen, band.high[i]));
  for (let i = time.length - 1; i >= 0; i--) ctx.lineTo(x(pen, time[i]), y(pen, band.low[i]));
  ctx.closePath();
  ctx.fillStyle = pen.colours.tone;
  ctx.fill();
}

function drawLines(pen: Pen, { lines }: PairPicture): void {
  const { ctx, u, px, colours } = pen;
  const places = lines.map(({ value }) => y(pen, value));
  const labels = spreadLabels(places, 15 * px, u.bbox.top + 7 * px, u.bbox.top + u.bbox.height - 7 * px);
  ctx.font = scaledFont(px);
  ctx.textAlign = "left";
  ctx.textBaseline = "middle";
  lines.forEach(({ label, manner }, i) => {
    ctx.strokeStyle = manner === "centre" ? colours.quiet : colours.edge;
    ctx.lineWidth = px;
    ctx.setLineDash(manner === "centre" ? [] : [6 * px, 4 * px]);
    ctx.beginPath();
    ctx.moveTo(u.bbox.left, places[i]);
    ctx.lineTo(u.bbox.left + u.bbox.width, places[i]);
    ctx.stroke();
    ctx.fillStyle = colours.quiet;
    ctx.fillText(label, u.bbox.left + u.bbox.width + 5 * px, labels[i]);
  });
  ctx.setLineDash([]);
}

function drawLevels(pen: Pen, { levels = [] }: PairPicture): void {
  const { ctx, px, colours } = pen;
  ctx.strokeStyle = colours.ink;
  ctx.lineWidth = 2.5 * px;
  for (const { from, to, value } of levels) {
    ctx.beginPath();
    ctx.moveTo(x(pen, from) - 4 * px, y(pen, value));
    ctx.lineTo(x(pen, to) + 4 * px, y(pen, value));
    ctx.stroke();
  }
}

function drawJoined(pen: Pen, { time, values }: PairPicture): void {
  const { ctx, px, colours } = pen;
  ctx.strokeStyle = colours.ink;
  ctx.lineWidth = 1.2 * px;
  ctx.beginPath();
  time.forEach((at, i) => {
    const value = values[i];
    if (value !== null) ctx.lineTo(x(pen, at), y(pen, value));
  });
  ctx.stroke();
}

/** A hollow point is a pair; a filled diamond is one that gives a signal: shape and filling, not colour. */
function drawPoints(pen: Pen, { time, values, marked }: PairPicture): void {
  const { ctx, px, colours } = pen;
  ctx.strokeStyle = colours.ink;
  ctx.fillStyle = colours.ink;
  ctx.lineWidth = 1.2 * px;
  time.forEach((at, i) => {
    const value = values[i];
    if (value === null) return;
    const [left, top] = [x(pen, at), y(pen, value)];
    ctx.beginPath();
    if (marked.has(i)) {
      const size = 5.5 * px;
      ctx.moveTo(left, top - size);
      ctx.lineTo(left + size, top);
      ctx.lineTo(left, top + size);
      ctx.lineTo(left - size, top);
      ctx.closePath();
      ctx.fill();
    } else {
      ctx.arc(left, top, 2.8 * px, 0, 2 * Math.PI);
      ctx.fillStyle = colours.lane;
      ctx.fill();
      ctx.fillStyle = colours.ink;
      ctx.stroke();
    }
  });
}
customElements.define("mill-pair-chart", PairChart);
