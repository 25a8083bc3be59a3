import type { Excursion, SmallTrend, Verdict } from "../messages/index.ts";
import { type PlantTime, withUnit } from "../words/index.ts";
import { type Markup, markup, nothing } from "./markup.ts";

const width = 260;
const height = 56;
/** the strip under the trend in which excursions are marked */
const strip = 6;
const top = 3;
const bottom = height - strip - 4;
/** left for the numbers of the scale */
const left = 34;

/** The small trend of a stream: an ink line where inside, hollow points in the verdict's colour where not, excursions as bars beneath. */
export function trendPicture(
  trend: SmallTrend | null,
  { from, to, excursions, time }: { from: number; to: number; excursions: readonly Excursion[]; time: PlantTime },
): Markup {
  if (!trend) return markup`<p class="quiet">No readings to draw.</p>`;
  const scale = scaleOf(trend);
  if (!scale) return markup`<p class="quiet">No numbers to draw.</p>`;
  const x = (at: number) => round(left + ((Math.min(Math.max(at, from), to) - from) / (to - from)) * (width - left));
  // What lies beyond the scale stands at its edge: it is seen that it was there, and not to be read off.
  const y = (value: number) => {
    const share = (value - scale.low) / (scale.high - scale.low);
    return round(bottom - Math.min(1, Math.max(0, share)) * (bottom - top));
  };
  const says = `${trend.property} from ${time.brief(from, to)} to ${time.brief(to, to)}, ${figure(scale.low)} to ${withUnit(figure(scale.high), trend.unit)}; ${excursions.length} excursions marked`;
  return markup`<svg class="trend" viewBox="0 0 ${width} ${height}" role="img" aria-label="${says}">
    ${targetBand(trend.target, scale, y)}
    <text x="${left - 4}" y="${top + 8}" text-anchor="end">${figure(scale.high)}</text>
    <text x="${left - 4}" y="${bottom}" text-anchor="end">${figure(scale.low)}</text>
    <path class="base" d="M${left} ${bottom + 1}H${width}"/>
    <path class="line" d="${linePath(trend, x, y)}"/>
    ${doubtful(trend).map(({ at, value, verdict }) => markup`<circle class="${verdict}" cx="${x(at)}" cy="${y(value)}" r="1.4"/>`)}
    ${excursions.map(({ kind, start, end }) => {
      const since = x(start);
      const wide = Math.max(1.5, x(end ?? to) - since);
      return markup`<rect class="${barClass(kind)}" x="${since}" y="${height - strip}" width="${round(wide)}" height="${strip}"/>`;
    })}
  </svg>`;
}

interface Scale {
  low: number;
  high: number;
}

/** Over what is to be believed, if there is any, and with a margin so that a steady line is no edge. */
function scaleOf({ value, verdict, target }: SmallTrend): Scale | undefined {
  const all = value.filter((each) => each !== null);
  const inside = value.filter((each, i) => each !== null && verdict[i] === "inside") as number[];
  const shown = [...(inside.length > 0 ? inside : all), ...(target ?? [])];
  if (all.length === 0) return undefined;
  const [low, high] = [Math.min(...shown), Math.max(...shown)];
  const margin = (high - low || Math.abs(high) || 1) * 0.08;
  return { low: low - margin, high: high + margin };
}

function linePath(
  { time, value, verdict, gaps }: SmallTrend,
  x: (at: number) => number,
  y: (value: number) => number,
): string {
  let path = "";
  let drawn: number | undefined;
  time.forEach((at, i) => {
    const here = value[i];
    if (here === null || verdict[i] !== "inside") {
      drawn = undefined;
      return;
    }
    const broken = drawn === undefined || gaps.some(([since, until]) => since >= drawn! && until <= at);
    path += `${broken ? "M" : "L"}${x(at)} ${y(here)}`;
    drawn = at;
  });
  return path;
}

function doubtful({ time, value, verdict }: SmallTrend): { at: number; value: number; verdict: Verdict }[] {
  return time.flatMap((at, i) => {
    const here = value[i];
    return here === null || verdict[i] === "inside" ? [] : [{ at, value: here, verdict: verdict[i] }];
  });
}

function targetBand(target: SmallTrend["target"], scale: Scale, y: (value: number) => number): Markup {
  if (!target) return nothing;
  const [low, high] = [Math.max(target[0], scale.low), Math.min(target[1], scale.high)];
  return markup`<rect class="target" x="${left}" y="${y(high)}" width="${width - left}" height="${round(y(low) - y(high))}"/>`;
}

function barClass(kind: string): string {
  return ["unfamiliar", "extrapolated", "sparse"].includes(kind) ? `bar ${kind}` : "bar";
}

function figure(value: number): string {
  return String(Number(value.toPrecision(2))).replace("-", "−");
}

function round(value: number): number {
  return Math.round(value * 10) / 10;
}
