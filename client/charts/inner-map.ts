import uPlot from "uplot";
import type { InnerPlace } from "../../core/messages/index.ts";
import { figure } from "../words/quantity.ts";
import { chartFont } from "./canvas-text.ts";
import type { Colours } from "./colours.ts";
import { type Ground, StillChart } from "./still-chart.ts";
import { valueTicks } from "./value-ticks.ts";

/** One component's inner relation: calibration samples as rings about the line u = t, the pairs as crosses, odd ones ringed. */
export class InnerMap extends StillChart {
  static override properties = { ...StillChart.properties, place: { attribute: false } };
  declare place: InnerPlace;

  protected override draw({ width, height, root, colours }: Ground): uPlot | undefined {
    if (!this.place) return undefined;
    const { calibration, pairs } = this.place;
    const x = rangeOf([...calibration.t, ...pairs.t]);
    const y = rangeOf([...calibration.u, ...pairs.u]);
    const axis = {
      font: chartFont,
      labelFont: chartFont,
      stroke: colours.quiet,
      labelSize: 18,
      labelGap: 0,
      gap: 4,
      grid: { show: false },
      ticks: { show: false },
      values: (_: uPlot, splits: number[]) => splits.map((value) => figure(value, 2)),
    };
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
          { ...axis, size: 24, label: "t, from the spectrum", splits: () => valueTicks(x[0], x[1], 4) },
          { ...axis, size: 58, label: "u, from the value", splits: () => valueTicks(y[0], y[1], 5) },
        ],
        hooks: { draw: [(u) => drawInner(u, this.place, colours)] },
      },
      [[...x], [null, null]],
      root,
    );
  }
}

function rangeOf(values: readonly number[]): [number, number] {
  const [low, high] = [Math.min(...values), Math.max(...values)];
  const room = (high - low || 1) * 0.06;
  return [low - room, high + room];
}

function drawInner(u: uPlot, { calibration, pairs, odd }: InnerPlace, colours: Colours): void {
  const { ctx, bbox } = u;
  const px = uPlot.pxRatio;
  const spot = (t: number, value: number): [number, number] => [u.valToPos(t, "x", true), u.valToPos(value, "y", true)];
  ctx.save();
  ctx.beginPath();
  ctx.rect(bbox.left, bbox.top, bbox.width, bbox.height);
  ctx.clip();
  ctx.strokeStyle = colours.rule;
  ctx.lineWidth = px;
  ctx.strokeRect(bbox.left, bbox.top, bbox.width, bbox.height);
  ctx.strokeStyle = colours.quiet;
  const [low, high] = [Math.min(...calibration.t, ...pairs.t), Math.max(...calibration.t, ...pairs.t)];
  ctx.beginPath();
  ctx.moveTo(...spot(low, low));
  ctx.lineTo(...spot(high, high));
  ctx.stroke();
  ctx.strokeStyle = colours.edge;
  calibration.t.forEach((t, i) => {
    ctx.beginPath();
    ctx.arc(...spot(t, calibration.u[i]), 2.2 * px, 0, 2 * Math.PI);
    ctx.stroke();
  });
  const isOdd = new Set(odd);
  ctx.strokeStyle = colours.ink;
  ctx.fillStyle = colours.ink;
  ctx.lineWidth = 1.6 * px;
  pairs.t.forEach((t, i) => {
    const [x, y] = spot(t, pairs.u[i]);
    const filled = isOdd.has(pairs.index[i]);
    const arm = (filled ? 5 : 3.4) * px;
    ctx.beginPath();
    ctx.moveTo(x - arm, y - arm);
    ctx.lineTo(x + arm, y + arm);
    ctx.moveTo(x - arm, y + arm);
    ctx.lineTo(x + arm, y - arm);
    ctx.stroke();
    if (!filled) return;
    ctx.beginPath();
    ctx.arc(x, y, 7 * px, 0, 2 * Math.PI);
    ctx.stroke();
  });
  ctx.restore();
}
customElements.define("mill-inner-map", InnerMap);
