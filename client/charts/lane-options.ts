import type uPlot from "uplot";
import type { PlantTime } from "../words/plant-time.ts";
import { decimalsOfStep, fixed } from "../words/quantity.ts";
import { chartFont } from "./canvas-text.ts";
import { axisHeight, laneLayout, padTop, yRange } from "./lane-layout.ts";
import { tickLabel, timeStep, timeTicks } from "./time-ticks.ts";
import { valueStep, valueTicks } from "./value-ticks.ts";

export interface LaneOptions {
  width: number;
  height: number;
  scale: readonly [number, number];
  /** with ribbon and time axis under it */
  foot: boolean;
  window: () => { from: number; to: number };
  time: PlantTime;
  colour: (name: "quiet" | "rule") => string;
  drawGround: (u: uPlot) => void;
  drawLane: (u: uPlot) => void;
}

const leftGutter = 52;
/** room for the limits' labels */
export const rightGutter = 104;

/** uPlot's options for one lane: scales and axes; the line and the ribbon are drawn by the two hooks. */
export function laneOptions(options: LaneOptions): uPlot.Options {
  const { width, height, scale, time, foot } = options;
  const layout = laneLayout(height, foot);
  const [low, high] = scale;
  const step = valueStep(low, high, Math.max(3, Math.floor((layout.trendBottom - layout.trendTop) / 30)));
  const most = Math.max(2, Math.floor((width - leftGutter - rightGutter) / 84));
  const stroke = () => options.colour("quiet");
  const ticks = { show: true, size: 4, width: 1, stroke: () => options.colour("rule") };
  return {
    width,
    height,
    ms: 1,
    padding: [padTop, rightGutter, 0, 0],
    legend: { show: false },
    cursor: {
      y: false,
      points: { show: false },
      drag: { x: false, y: false, setScale: false },
      bind: {
        mousedown: () => null,
        mouseup: () => null,
        mousemove: () => null,
        mouseleave: () => null,
        mouseenter: () => null,
        dblclick: () => null,
        click: () => null,
      },
    },
    scales: {
      x: {
        time: false,
        range: () => {
          const { from, to } = options.window();
          return [from, to];
        },
      },
      y: { range: () => yRange(low, high, layout) },
    },
    series: [{}, { scale: "y", paths: () => null, points: { show: false } }],
    axes: [
      {
        show: foot,
        size: axisHeight,
        font: chartFont,
        gap: 4,
        stroke,
        grid: { show: false },
        ticks,
        splits: (_, __, from, to) => timeTicks(from, to, timeStep(to - from, most), time),
        values: (u, splits) => {
          const { min, max } = u.scales["x"];
          const spanMs = (max as number) - (min as number);
          const stepMs = timeStep(spanMs, most);
          // The word at the edge ("now", "stopped") needs the room.
          const clear = (spanMs * 26) / (width - leftGutter - rightGutter);
          return splits.map((at) => ((max as number) - at > clear ? tickLabel(at, stepMs, time) : ""));
        },
      },
      {
        scale: "y",
        size: leftGutter,
        font: chartFont,
        gap: 4,
        stroke,
        grid: { show: false },
        ticks,
        splits: () => valueTicks(low, high, (high - low) / step),
        values: (_, splits) => splits.map((value) => fixed(value, decimalsOfStep(step))),
      },
    ],
    hooks: { drawClear: [options.drawGround], draw: [options.drawLane] },
  };
}
