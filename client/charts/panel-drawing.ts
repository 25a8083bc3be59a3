import type { Region } from "../../core/messages/index.ts";
import { axisUnit, grouped, percent } from "../words/quantity.ts";
import { hatch, scaledFont } from "./canvas-text.ts";
import type { Colours } from "./colours.ts";
import type { PanelLine, PanelPicture } from "./panel-picture.ts";
import { spreadLabels } from "./value-ticks.ts";

export interface PanelPen {
  ctx: CanvasRenderingContext2D;
  ratio: number;
  left: number;
  top: number;
  width: number;
  height: number;
  x: (point: number) => number;
  y: (value: number) => number;
  colours: Colours;
}

/** What lies under the lines: the calibration's range, and the regions that gave most. */
export function drawPanelGround(pen: PanelPen, { axis, range, regions }: PanelPicture): void {
  const { ctx, colours } = pen;
  for (const { from, to } of regions ?? []) {
    const [start, end] = [pen.x(Math.min(from, to)), pen.x(Math.max(from, to))];
    ctx.fillStyle = colours.tone;
    ctx.fillRect(start, pen.top, Math.max(2 * pen.ratio, end - start), pen.height);
  }
  if (!range) return;
  ctx.beginPath();
  axis.forEach((point, index) => {
    if (index === 0) ctx.moveTo(pen.x(point), pen.y(range.high[index]));
    else ctx.lineTo(pen.x(point), pen.y(range.high[index]));
  });
  for (let index = axis.length - 1; index >= 0; index--) ctx.lineTo(pen.x(axis[index]), pen.y(range.low[index]));
  ctx.closePath();
  ctx.fillStyle = colours.band;
  ctx.fill();
  ctx.strokeStyle = colours.edge;
  ctx.lineWidth = pen.ratio * 0.8;
  ctx.stroke();
}

export function drawPanel(pen: PanelPen, picture: PanelPicture): void {
  const { ctx, ratio, colours, left, top, width, height } = pen;
  ctx.save();
  ctx.beginPath();
  ctx.rect(left, top, width, height);
  ctx.clip();
  if (picture.bars) drawBars(pen, picture.axis, picture.bars);
  for (const line of picture.lines) drawLine(pen, picture.axis, line);
  ctx.restore();
  ctx.strokeStyle = colours.rule;
  ctx.lineWidth = ratio;
  ctx.strokeRect(left, top, width, height);
  if (picture.regions) drawRegionNames(pen, picture.regions);
  drawLineLabels(pen, picture);
  if (picture.axis.length === 0) {
    ctx.fillStyle = hatch(ctx, colours.edge, ratio);
    ctx.fillRect(left, top, width, height);
  }
}

function drawLine(
  { ctx, ratio, colours, x, y }: PanelPen,
  axis: readonly number[],
  { values, manner }: PanelLine,
): void {
  ctx.strokeStyle = manner === "reading" ? colours.ink : colours.quiet;
  ctx.lineWidth = (manner === "reading" ? 1.8 : 1.2) * ratio;
  ctx.setLineDash(manner === "reading" ? [] : manner === "model" ? [5 * ratio, 3 * ratio] : [ratio, 3 * ratio]);
  ctx.lineJoin = "round";
  ctx.beginPath();
  let begun = false;
  axis.forEach((point, index) => {
    const value = values[index];
    if (value === null || value === undefined) begun = false;
    else if (begun) ctx.lineTo(x(point), y(value));
    else {
      ctx.moveTo(x(point), y(value));
      begun = true;
    }
  });
  ctx.stroke();
  ctx.setLineDash([]);
}

function drawBars(
  { ctx, ratio, colours, x, y }: PanelPen,
  axis: readonly number[],
  { values, colour }: NonNullable<PanelPicture["bars"]>,
): void {
  const zero = y(0);
  const wide = axis.length > 1 ? Math.max(ratio, (x(axis[1]) - x(axis[0])) * 0.8) : 4 * ratio;
  ctx.fillStyle = colours[colour];
  axis.forEach((point, index) => {
    ctx.fillRect(x(point) - wide / 2, Math.min(zero, y(values[index])), wide, Math.abs(y(values[index]) - zero));
  });
  ctx.strokeStyle = colours.quiet;
  ctx.lineWidth = ratio;
  ctx.beginPath();
  ctx.moveTo(x(axis[0]), zero);
  ctx.lineTo(x(axis[axis.length - 1]), zero);
  ctx.stroke();
}

/** "1 724–1 768 nm" */
export function regionName({ from, to, unit }: Region): string {
  return `${grouped(Math.min(from, to))}–${grouped(Math.max(from, to))} ${axisUnit(unit)}`;
}

function drawRegionNames(pen: PanelPen, regions: readonly Region[]): void {
  const { ctx, ratio, colours } = pen;
  ctx.font = scaledFont(ratio);
  ctx.textBaseline = "top";
  ctx.textAlign = "left";
  const taken: { from: number; to: number }[] = [];
  for (const region of regions) {
    const words = `${regionName(region)}: ${percent(region.share)}`;
    const wide = ctx.measureText(words).width + 6 * ratio;
    const middle = (pen.x(region.from) + pen.x(region.to)) / 2;
    const from = Math.min(pen.left + pen.width - wide, Math.max(pen.left, middle - wide / 2));
    // The most telling regions come first; a name that would lie over another is left to the list beside the chart.
    if (taken.some((other) => from < other.to + 6 * ratio && from + wide > other.from - 6 * ratio)) continue;
    taken.push({ from, to: from + wide });
    ctx.fillStyle = colours.lane;
    ctx.fillRect(from, pen.top + 2 * ratio, wide, 16 * ratio);
    ctx.fillStyle = colours.ink;
    ctx.fillText(words, from + 3 * ratio, pen.top + 4 * ratio);
  }
}

function drawLineLabels(pen: PanelPen, { lines, range, bars }: PanelPicture): void {
  const { ctx, ratio, colours } = pen;
  const ends = lines.map(({ label, values, manner }) => ({
    label,
    at: pen.y(values.findLast((value) => value !== null) ?? 0),
    colour: manner === "reading" ? colours.ink : colours.quiet,
  }));
  if (range) ends.push({ label: range.label, at: pen.y(range.high[range.high.length - 1]), colour: colours.quiet });
  if (bars) ends.push({ label: bars.label, at: pen.y(0), colour: colours.quiet });
  const spots = spreadLabels(
    ends.map(({ at }) => at),
    14 * ratio,
    pen.top + 6 * ratio,
    pen.top + pen.height - 4 * ratio,
  );
  ctx.font = scaledFont(ratio);
  ctx.textAlign = "left";
  ctx.textBaseline = "middle";
  ends.forEach(({ label, colour }, index) => {
    ctx.fillStyle = colour;
    ctx.fillText(label, pen.left + pen.width + 8 * ratio, spots[index]);
  });
}
