import type { PlantProperty } from "../../core/messages/index.ts";
import { type Verdict, verdictsOfMask, worstOfMask } from "../../core/messages/index.ts";
import { firstAtOrAfter, type HeldTrend } from "../data/trend-columns.ts";
import { gapsOf, type Run, trendRuns } from "../data/trend-runs.ts";
import { decimalsOfStep, fixed } from "../words/quantity.ts";
import { hatch, scaledFont } from "./canvas-text.ts";
import type { Colours } from "./colours.ts";
import { drawLabPoints } from "./lab-marks.ts";
import { type LaneLayout, wordyStrip } from "./lane-layout.ts";
import { ratioPlace } from "./ratio-scale.ts";
import { spreadLabels, valueStep } from "./value-ticks.ts";

/** What a lane's chart is drawn from. */
export interface LanePicture {
  trend: HeldTrend | undefined;
  property: PlantProperty;
  periodMs: number;
  /** readings further apart leave a gap, ms */
  gapMs: number;
  from: number;
  to: number;
  live: boolean;
  /** with ribbon and time axis under it; of trends above one another only the lowest has them */
  foot: boolean;
  /** what is shown is old: everything after the newest reading is unknown, however short */
  old: boolean;
  /** stretches during which something stayed beyond its limit, for the marks on top */
  marks: readonly { kind: string; from: number; to: number }[];
  /** the laboratory's results for the property */
  lab: readonly LabPoint[];
}

/** One result of the laboratory: when its sample was drawn, and whether its pair counts or was kept apart. */
export interface LabPoint {
  at: number;
  value: number;
  counts: boolean;
}

/** The canvas and the two mappings, in canvas pixels. */
export interface Pen {
  ctx: CanvasRenderingContext2D;
  /** canvas pixels to a CSS pixel */
  ratio: number;
  left: number;
  top: number;
  width: number;
  x: (at: number) => number;
  y: (value: number) => number;
  layout: LaneLayout;
  colours: Colours;
}

const ofVerdict = (colours: Colours, verdict: Verdict) =>
  ({
    inside: colours.ink,
    sparse: colours.sparse,
    extrapolated: colours.far,
    unfamiliar: colours.odd,
    unusable: colours.quiet,
  })[verdict];

/** Everything that lies under the line: target band, limits, hatched gaps. */
export function drawGround(pen: Pen, picture: LanePicture): void {
  const { ctx, colours, layout, left, width, ratio } = pen;
  const { target, limits, scale } = picture.property;
  const top = pen.top + layout.trendTop * ratio;
  const bottom = pen.top + layout.trendBottom * ratio;
  if (target) {
    const [low, high] = target.map((value) => Math.min(bottom, Math.max(top, pen.y(value))));
    ctx.fillStyle = colours.tone;
    ctx.fillRect(left, high, width, low - high);
  }
  ctx.strokeStyle = colours.quiet;
  ctx.lineWidth = ratio;
  for (const { limit } of limits) {
    if (limit < scale[0] || limit > scale[1]) continue;
    const y = Math.round(pen.y(limit)) + 0.5;
    ctx.beginPath();
    ctx.moveTo(left, y);
    ctx.lineTo(left + width, y);
    ctx.stroke();
  }
  if (picture.trend) drawGaps(pen, picture, picture.trend, top);
}

function drawGaps(pen: Pen, picture: LanePicture, trend: HeldTrend, top: number): void {
  const { ctx, colours, layout, ratio } = pen;
  for (const gap of gapsOf(trend, picture, picture.gapMs)) {
    const x = pen.x(gap.from);
    const gapWidth = Math.max(ratio, pen.x(gap.to) - x);
    ctx.fillStyle = hatch(ctx, colours.edge, ratio);
    ctx.fillRect(x, top, gapWidth, layout.trendBottom * ratio + pen.top - top);
    ctx.fillRect(x, pen.top + layout.t2Top * ratio, gapWidth, (layout.qTop + layout.strip - layout.t2Top) * ratio);
    const words = "no readings";
    ctx.font = scaledFont(ratio);
    const wide = ctx.measureText(words).width + 12 * ratio;
    if (gapWidth < wide + 8 * ratio) continue;
    const middle = x + gapWidth / 2;
    const y = pen.top + ((layout.trendTop + layout.trendBottom) / 2) * ratio;
    ctx.fillStyle = colours.lane;
    ctx.fillRect(middle - wide / 2, y - 10 * ratio, wide, 20 * ratio);
    ctx.fillStyle = colours.ink;
    ctx.textAlign = "center";
    ctx.textBaseline = "middle";
    ctx.fillText(words, middle, y);
  }
}

/** The bands, the line in its manners, the ribbon, and the words at the right edge. */
export function drawLane(pen: Pen, picture: LanePicture): void {
  const { ctx, layout, left, width, ratio } = pen;
  const { trend } = picture;
  if (trend) {
    ctx.save();
    ctx.beginPath();
    ctx.rect(left, pen.top, width, layout.height * ratio);
    ctx.clip();
    const first = Math.max(0, firstAtOrAfter(trend.time, picture.from) - 1);
    const last = Math.min(trend.time.length - 1, firstAtOrAfter(trend.time, picture.to));
    const runs = trendRuns(trend, picture.property.name).filter((run) => run.last >= first && run.first <= last);
    for (const run of runs) drawBands(pen, picture, trend, run);
    for (const run of runs) drawRun(pen, picture, trend, run);
    if (picture.foot) drawRibbon(pen, picture, trend, first, last);
    drawMarks(pen, picture);
    drawLabPoints(pen, picture.lab, (value) => pen.y(clamped(value, picture.property.scale)));
    ctx.restore();
  }
  if (picture.foot) drawRibbonScale(pen);
  drawEdge(pen, picture);
  drawLimitLabels(pen, picture.property);
}

/** A value as it is drawn: what lies outside the fixed scale stands at its edge. */
const clamped = (value: number, [low, high]: readonly [number, number]) => Math.min(high, Math.max(low, value));

function drawBands(pen: Pen, picture: LanePicture, trend: HeldTrend, run: Run): void {
  const { ctx, colours } = pen;
  const { mean, min, max, uncertainty } = trend.properties[picture.property.name];
  const { scale } = picture.property;
  const fill = (low: (index: number) => number | null, high: (index: number) => number | null, colour: string) => {
    ctx.beginPath();
    let begun = false;
    for (let index = run.first; index <= run.last; index++) {
      const value = high(index);
      if (value === null) return;
      const x = pen.x(trend.time[index]);
      const y = pen.y(clamped(value, scale));
      if (begun) ctx.lineTo(x, y);
      else ctx.moveTo(x, y);
      begun = true;
    }
    for (let index = run.last; index >= run.first; index--) {
      const value = low(index);
      if (value === null) return;
      ctx.lineTo(pen.x(trend.time[index]), pen.y(clamped(value, scale)));
    }
    ctx.closePath();
    ctx.fillStyle = colour;
    ctx.fill();
  };
  if (!trend.whole) {
    ctx.globalAlpha = 0.55;
    fill(
      (index) => min[index],
      (index) => max[index],
      run.verdict === "inside" ? colours.edge : ofVerdict(colours, run.verdict),
    );
  } else if (run.verdict === "inside") {
    ctx.globalAlpha = 0.16;
    const around = (index: number, side: 1 | -1) => {
      const value = mean[index];
      const half = uncertainty[index];
      return value === null || half === null ? null : value + side * half;
    };
    fill(
      (index) => around(index, -1),
      (index) => around(index, 1),
      colours.ink,
    );
  }
  ctx.globalAlpha = 1;
}

function drawRun(pen: Pen, picture: LanePicture, trend: HeldTrend, run: Run): void {
  const { ctx, colours, ratio } = pen;
  const { mean } = trend.properties[picture.property.name];
  const { scale } = picture.property;
  const start = run.joins ? run.first - 1 : run.first;
  const point = (index: number): [number, number] => [
    pen.x(trend.time[index]),
    pen.y(clamped(mean[index] as number, scale)),
  ];
  const inside = run.verdict === "inside";
  const colour = ofVerdict(colours, run.verdict);
  ctx.strokeStyle = colour;
  ctx.lineWidth = (inside ? 1.8 : 1.2) * ratio;
  ctx.lineJoin = "round";
  ctx.setLineDash(inside ? [] : [4 * ratio, 3 * ratio]);
  ctx.beginPath();
  for (let index = start; index <= run.last; index++) {
    const [x, y] = point(index);
    if (index === start) ctx.moveTo(x, y);
    else ctx.lineTo(x, y);
  }
  // A lone reading between two gaps is still a reading: a stroke of its own width.
  if (inside && start === run.last) {
    const [x, y] = point(start);
    ctx.lineTo(x + ratio, y);
  }
  ctx.stroke();
  ctx.setLineDash([]);
  if (!inside) drawHollow(pen, trend, run, point, colour);
  drawBeyondScale(pen, picture, trend, run, colour);
}

function drawHollow(
  pen: Pen,
  trend: HeldTrend,
  run: Run,
  point: (index: number) => [number, number],
  colour: string,
): void {
  const { ctx, colours, ratio } = pen;
  let lastX = Number.NEGATIVE_INFINITY;
  ctx.fillStyle = colours.lane;
  ctx.strokeStyle = colour;
  ctx.lineWidth = 1.3 * ratio;
  for (let index = run.first; index <= run.last; index++) {
    const verdict = verdictsOfMask(trend.verdict[index]);
    if (verdict.length === 1 && verdict[0] === "inside") continue; // the inside reading that the run leads up to
    const [x, y] = point(index);
    if (x - lastX < 9 * ratio) continue;
    lastX = x;
    ctx.beginPath();
    ctx.arc(x, y, 2.7 * ratio, 0, 2 * Math.PI);
    ctx.fill();
    ctx.stroke();
  }
}

/** Small arrows at the edge of the fixed scale where the value is beyond it. */
function drawBeyondScale(pen: Pen, picture: LanePicture, trend: HeldTrend, run: Run, colour: string): void {
  const { ctx, ratio } = pen;
  const { mean } = trend.properties[picture.property.name];
  const [low, high] = picture.property.scale;
  let lastX = Number.NEGATIVE_INFINITY;
  ctx.fillStyle = colour;
  for (let index = run.first; index <= run.last; index++) {
    const value = mean[index] as number;
    if (value >= low && value <= high) continue;
    const x = pen.x(trend.time[index]);
    if (x - lastX < 12 * ratio) continue;
    lastX = x;
    const way = value > high ? -1 : 1;
    const y = pen.y(value > high ? high : low) - way * 6 * ratio;
    ctx.beginPath();
    ctx.moveTo(x, y + way * 6 * ratio);
    ctx.lineTo(x - 4 * ratio, y);
    ctx.lineTo(x + 4 * ratio, y);
    ctx.fill();
  }
}

function drawRibbon(pen: Pen, picture: LanePicture, trend: HeldTrend, first: number, last: number): void {
  const { colours, layout } = pen;
  const spanOf = columnSpans(pen, trend, picture.periodMs, picture.gapMs);
  const rows = [
    { top: layout.t2Top, columns: trend.t2, beyond: colours.far },
    { top: layout.qTop, columns: trend.q, beyond: colours.odd },
  ];
  for (const { top, columns, beyond } of rows) {
    const place = (value: number) => pen.top + (top + layout.strip * (1 - ratioPlace(value))) * pen.ratio;
    drawStrip(pen, columns, place, spanOf, beyond, first, last);
  }
  drawUnusable(pen, trend, spanOf, first, last);
}

/** One strip as steps: few long paths are far cheaper to paint than a rectangle for each column. */
function drawStrip(
  pen: Pen,
  columns: HeldTrend["t2"],
  place: (ratio: number) => number,
  spanOf: (index: number) => [number, number],
  beyond: string,
  first: number,
  last: number,
): void {
  const { ctx, colours, ratio } = pen;
  const limit = place(1);
  const floor = place(0);
  const fill = new Path2D();
  const edge = new Path2D();
  const over = new Path2D();
  let end = Number.NaN; // where the step before ends; NaN before the first and after a gap
  for (let index = first; index <= last; index++) {
    const mean = columns.mean[index];
    const max = columns.max[index];
    if (mean === null || max === null) continue;
    const [x, wide] = spanOf(index);
    const top = place(mean);
    const step = Math.max(limit, top);
    const joins = Math.abs(x - end) < 1.5 * ratio;
    if (!joins) {
      if (!Number.isNaN(end)) fill.lineTo(end, floor);
      fill.moveTo(x, floor);
      edge.moveTo(x, step);
    }
    fill.lineTo(x, step);
    fill.lineTo(x + wide, step);
    edge.lineTo(x, step);
    edge.lineTo(x + wide, step);
    end = x + wide;
    if (mean > 1) over.rect(x, top, wide, limit - top);
    // One reading beyond the limit among many: a hairline, as high as it went.
    if (max > 1 && max > mean) over.rect(x + wide / 2 - ratio * 0.6, place(max), 1.2 * ratio, limit - place(max));
  }
  if (!Number.isNaN(end)) fill.lineTo(end, floor);
  ctx.fillStyle = colours.fill;
  ctx.fill(fill);
  // The edge carries the reading of the strip: it stands out from the ground where the fill alone would not.
  ctx.strokeStyle = colours.edge;
  ctx.lineWidth = ratio;
  ctx.stroke(edge);
  ctx.fillStyle = beyond;
  ctx.fill(over);
}

/** Where an entry's column begins and how wide it is, canvas px. A reading speaks until the next one; an interval has its own width. */
function columnSpans(pen: Pen, trend: HeldTrend, periodMs: number, gapMs: number): (index: number) => [number, number] {
  const { time, whole, widthMs } = trend;
  const least = pen.ratio;
  const overlap = 0.6;
  if (!whole) {
    const wide = Math.max(least, pen.x(widthMs) - pen.x(0));
    return (index) => [pen.x(time[index]) - wide / 2, wide + overlap];
  }
  return (index) => {
    const step = (time[index + 1] ?? Number.POSITIVE_INFINITY) - time[index];
    const x = pen.x(time[index]);
    const crossesGap = step > gapMs && trend.gaps.some(([from]) => from === time[index]);
    const ms = crossesGap || !Number.isFinite(step) ? periodMs : step;
    return [x, Math.max(least, pen.x(time[index] + ms) - x) + overlap];
  };
}

/** Readings without any number stand as ticks between the strips. */
function drawUnusable(
  pen: Pen,
  trend: HeldTrend,
  spanOf: (index: number) => [number, number],
  first: number,
  last: number,
): void {
  const { ctx, colours, layout, ratio } = pen;
  ctx.fillStyle = colours.ink;
  for (let index = first; index <= last; index++) {
    if (worstOfMask(trend.verdict[index]) !== "unusable") continue;
    const [x, wide] = spanOf(index);
    const top = pen.top + (layout.t2Top + layout.strip + 1) * ratio;
    ctx.fillRect(x, top, Math.max(1.5 * ratio, wide), (layout.qTop - layout.t2Top - layout.strip - 2) * ratio);
  }
}

function drawMarks(pen: Pen, picture: LanePicture): void {
  const { ctx, colours, ratio } = pen;
  // Marks of one time lie over each other: their words stand side by side, as far as there is room over the mark.
  let wordsEnd = Number.NEGATIVE_INFINITY;
  for (const mark of [...picture.marks].sort((a, b) => a.from - b.from)) {
    const x = pen.x(Math.max(mark.from, picture.from));
    const wide = Math.max(3 * ratio, pen.x(Math.min(mark.to, picture.to)) - x);
    if (mark.to < picture.from || mark.from > picture.to) continue;
    ctx.fillStyle =
      mark.kind === "unfamiliar"
        ? colours.odd
        : mark.kind === "extrapolated"
          ? colours.far
          : mark.kind === "sparse"
            ? colours.sparse
            : colours.ink;
    ctx.fillRect(x, pen.top, wide, 3 * ratio);
    ctx.font = scaledFont(ratio);
    const begin = Math.max(x + 2 * ratio, wordsEnd + 8 * ratio);
    const end = begin + ctx.measureText(mark.kind).width;
    if (end + 4 * ratio > x + wide) continue;
    ctx.textAlign = "left";
    ctx.textBaseline = "top";
    ctx.fillText(mark.kind, begin, pen.top + 5 * ratio);
    wordsEnd = end;
  }
}

/** Lines at ten times, once and half the limit, with their words at the right edge. */
function drawRibbonScale(pen: Pen): void {
  const { ctx, colours, layout, left, width, ratio } = pen;
  ctx.font = scaledFont(ratio);
  ctx.textBaseline = "middle";
  for (const top of [layout.t2Top, layout.qTop]) {
    const place = (value: number) => pen.top + (top + layout.strip * (1 - ratioPlace(value))) * ratio;
    const line = (value: number, colour: string, dash: number[]) => {
      const y = Math.round(place(value)) + 0.5;
      ctx.strokeStyle = colour;
      ctx.lineWidth = ratio;
      ctx.setLineDash(dash);
      ctx.beginPath();
      ctx.moveTo(left, y);
      ctx.lineTo(left + width, y);
      ctx.stroke();
      ctx.setLineDash([]);
    };
    line(10, colours.rule, []);
    line(0.5, colours.edge, [ratio, 3 * ratio]);
    line(1, colours.quiet, []);
    ctx.fillStyle = colours.quiet;
    ctx.textAlign = "left";
    const words: [number, string][] =
      layout.strip >= wordyStrip
        ? [
            [10, "10 ×"],
            [1, "1 = limit"],
            [0.5, "half"],
          ]
        : [
            [10, "10 ×"],
            [1, "1 = limit"],
          ];
    const spots = spreadLabels(
      words.map(([value]) => place(value)),
      12 * ratio,
      0,
      Number.POSITIVE_INFINITY,
    );
    words.forEach(([, word], index) => {
      ctx.fillText(word, left + width + 8 * ratio, spots[index]);
    });
    ctx.textAlign = "right";
    ctx.fillText(top === layout.t2Top ? "T²" : "Q", left - 8 * ratio, place(1));
  }
}

function drawEdge(pen: Pen, picture: LanePicture): void {
  const { ctx, colours, layout, left, width, ratio } = pen;
  ctx.strokeStyle = picture.live ? colours.quiet : colours.ink;
  ctx.lineWidth = (picture.live ? 1 : 2) * ratio;
  ctx.setLineDash(picture.live ? [] : [5 * ratio, 4 * ratio]);
  ctx.beginPath();
  ctx.moveTo(left + width, pen.top);
  ctx.lineTo(left + width, pen.top + layout.height * ratio);
  ctx.stroke();
  ctx.setLineDash([]);
  if (!picture.foot) return;
  ctx.fillStyle = picture.live ? colours.quiet : colours.ink;
  ctx.font = scaledFont(ratio);
  ctx.textAlign = "left";
  ctx.textBaseline = "middle";
  ctx.fillText(picture.live ? "now" : "stopped", left + width + 8 * ratio, pen.top + (layout.height + 14) * ratio);
}

function drawLimitLabels(pen: Pen, { limits, scale, target }: PlantProperty): void {
  const { ctx, colours, layout, left, width, ratio } = pen;
  const decimals = decimalsOfStep(valueStep(scale[0], scale[1], 5));
  const shown = limits
    .filter(({ limit }) => limit >= scale[0] && limit <= scale[1])
    .map(({ side, limit }) => ({
      at: limit,
      words: `${side} ${fixed(limit, Math.max(decimals, decimalsOfStep(limit)))}`,
      colour: colours.ink,
    }));
  if (target) shown.push({ at: (target[0] + target[1]) / 2, words: "target", colour: colours.quiet });
  const spots = spreadLabels(
    shown.map(({ at }) => pen.y(at)),
    14 * ratio,
    pen.top + 6 * ratio,
    pen.top + layout.trendBottom * ratio,
  );
  ctx.font = scaledFont(ratio);
  ctx.textAlign = "left";
  ctx.textBaseline = "middle";
  shown.forEach(({ words, colour }, index) => {
    ctx.fillStyle = colour;
    ctx.fillText(words, left + width + 8 * ratio, spots[index]);
  });
}
