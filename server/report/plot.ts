import { logTicks, ticks } from "./ticks.ts";

export interface AxisOfPlot {
  range: readonly [number, number];
  label: string;
  log?: boolean;
  /** ticks of our own instead of round numbers */
  at?: readonly number[];
  /** about how many ticks */
  count?: number;
}

export interface PlotOptions {
  /** what a person who cannot see it should hear */
  says: string;
  width?: number;
  height?: number;
  x: AxisOfPlot;
  y: AxisOfPlot;
}

type Point = readonly [number, number];

/** Named looks of marks; style.ts says how each is drawn. */
export type Look = "ink" | "quiet" | "rule" | "extrapolated" | "unfamiliar" | "faint";

const margin = { left: 58, right: 16, top: 10, bottom: 40 };

/** One picture with two axes, drawn as SVG text. Marks are drawn in the order in which they are added. */
export class Plot {
  readonly #options: PlotOptions;
  readonly #width: number;
  readonly #height: number;
  readonly #marks: string[] = [];
  readonly #labels: { x: number; y: number }[] = [];

  constructor(options: PlotOptions) {
    this.#options = options;
    this.#width = options.width ?? 520;
    this.#height = options.height ?? 340;
  }

  line(points: Iterable<Point>, look: Look, dash?: string): this {
    const path = Array.from(points, ([x, y], i) => `${i === 0 ? "M" : "L"}${this.#x(x)} ${this.#y(y)}`).join("");
    return this.#add(`<path class="line ${look}" d="${path}"${dash ? ` stroke-dasharray="${dash}"` : ""}/>`);
  }

  /** The area between two lines over the same x. */
  band(xs: ArrayLike<number>, low: ArrayLike<number>, high: ArrayLike<number>): this {
    const there = Array.from(xs, (x, i) => `${this.#x(x)} ${this.#y(low[i])}`);
    const back = Array.from(xs, (x, i) => `${this.#x(x)} ${this.#y(high[i])}`).reverse();
    return this.#add(`<path class="band" d="M${[...there, ...back].join("L")}Z"/>`);
  }

  dot(
    [x, y]: Point,
    look: Look,
    shape: "filled" | "hollow" | "diamond" | "hollow diamond" = "filled",
    title?: string,
  ): this {
    const [cx, cy] = [this.#x(x), this.#y(y)];
    const inner = title ? `<title>${escapeText(title)}</title>` : "";
    if (shape.endsWith("diamond")) {
      const fill = shape === "diamond" ? "filled" : "hollow";
      return this.#add(`<path class="dot ${look} ${fill}" d="M${cx} ${cy - 5}l5 5l-5 5l-5 -5Z">${inner}</path>`);
    }
    return this.#add(`<circle class="dot ${look} ${shape}" cx="${cx}" cy="${cy}" r="3.2">${inner}</circle>`);
  }

  bar(x: number, width: number, y: number, look: Look): this {
    const left = this.#x(x - width / 2);
    const top = this.#y(y);
    const floor = this.#y(Math.max(0, this.#options.y.range[0]));
    return this.#add(
      `<rect class="bar ${look}" x="${left}" y="${Math.min(top, floor)}" width="${round(this.#x(x + width / 2) - left)}" height="${round(Math.abs(floor - top))}"/>`,
    );
  }

  /** A horizontal limit, labelled at the right end. */
  level(y: number, label: string, look: Look = "rule"): this {
    const [from, to] = this.#options.x.range;
    this.line(
      [
        [from, y],
        [to, y],
      ],
      look,
      "5 3",
    );
    return label
      ? this.#add(
          `<text class="label" x="${this.#width - margin.right - 3}" y="${this.#y(y) - 4}" text-anchor="end">${escapeText(label)}</text>`,
        )
      : this;
  }

  /** A vertical limit, labelled at the top. */
  upright(x: number, label: string, look: Look = "rule"): this {
    const [from, to] = this.#options.y.range;
    this.line(
      [
        [x, from],
        [x, to],
      ],
      look,
      "5 3",
    );
    return label
      ? this.#add(
          `<text class="label" x="${this.#x(x) - 4}" y="${margin.top + 11}" text-anchor="end">${escapeText(label)}</text>`,
        )
      : this;
  }

  /** A name beside a point, moved out of the way of the names before it. */
  name([x, y]: Point, text: string): this {
    const left = this.#x(x) > this.#width * 0.75;
    let at = { x: this.#x(x) + (left ? -7 : 7), y: this.#y(y) + 4 };
    for (
      let tries = 0;
      tries < 6 && this.#labels.some((other) => Math.abs(other.x - at.x) < 34 && Math.abs(other.y - at.y) < 11);
      tries++
    ) {
      at = { x: at.x, y: at.y + (tries % 2 === 0 ? -12 * (tries + 1) : 12 * (tries + 1)) };
    }
    this.#labels.push(at);
    return this.#add(
      `<text class="name" x="${round(at.x)}" y="${round(at.y)}"${left ? ' text-anchor="end"' : ""}>${escapeText(text)}</text>`,
    );
  }

  /** Words above a point, with a line down to it. */
  note([x, y]: Point, text: string): this {
    const [cx, cy] = [this.#x(x), this.#y(y)];
    this.#add(`<path class="line rule" d="M${cx} ${round(cy - 7)}v-22"/>`);
    return this.#add(`<text class="name" x="${round(cx - 2)}" y="${round(cy - 33)}">${escapeText(text)}</text>`);
  }

  toString(): string {
    const { x, y, says } = this.#options;
    const bottom = this.#height - margin.bottom;
    const right = this.#width - margin.right;
    const xTicks = ticksOf(x).map(
      (value) =>
        `<path class="tick" d="M${this.#x(value)} ${bottom}v4"/><text class="axis" x="${this.#x(value)}" y="${bottom + 17}" text-anchor="middle">${plain(value)}</text>`,
    );
    const yTicks = ticksOf(y).map(
      (value) =>
        `<path class="grid" d="M${margin.left} ${this.#y(value)}H${right}"/><text class="axis" x="${margin.left - 6}" y="${this.#y(value) + 4}" text-anchor="end">${plain(value)}</text>`,
    );
    const middle = (margin.top + bottom) / 2;
    const clip = `c${hash(says + this.#marks.length + this.#marks[0])}`;
    return [
      `<svg viewBox="0 0 ${this.#width} ${this.#height}" role="img" aria-label="${escapeText(says)}">`,
      `<clipPath id="${clip}"><rect x="${margin.left}" y="${margin.top}" width="${right - margin.left}" height="${bottom - margin.top}"/></clipPath>`,
      ...yTicks,
      ...xTicks,
      `<path class="tick" d="M${margin.left} ${bottom}H${right}"/>`,
      `<g clip-path="url(#${clip})">${this.#marks.filter((mark) => !mark.startsWith("<text")).join("")}</g>`,
      ...this.#marks.filter((mark) => mark.startsWith("<text")),
      `<text class="axis title" x="${(margin.left + right) / 2}" y="${this.#height - 6}" text-anchor="middle">${escapeText(x.label)}</text>`,
      `<text class="axis title" transform="translate(13 ${middle}) rotate(-90)" text-anchor="middle">${escapeText(y.label)}</text>`,
      "</svg>",
    ].join("");
  }

  #add(mark: string): this {
    this.#marks.push(mark);
    return this;
  }

  #x(value: number): number {
    return round(margin.left + share(value, this.#options.x) * (this.#width - margin.left - margin.right));
  }

  #y(value: number): number {
    return round(
      this.#height - margin.bottom - share(value, this.#options.y) * (this.#height - margin.top - margin.bottom),
    );
  }
}

function share(value: number, { range: [low, high], log }: AxisOfPlot): number {
  if (!log) return (value - low) / (high - low);
  return Math.log(Math.max(value, low * 1e-3) / low) / Math.log(high / low);
}

function ticksOf({ range, log, at, count = 6 }: AxisOfPlot): readonly number[] {
  if (at) return at;
  // a descending axis has its larger end on the left
  const [low, high] = range[0] < range[1] ? range : [range[1], range[0]];
  return log ? logTicks(low, high) : ticks(low, high, count);
}

function plain(value: number): string {
  const size = Math.abs(value);
  if (size !== 0 && (size >= 1e5 || size < 1e-3)) return value.toExponential().replace("e+", "e").replace("-", "−");
  return String(value).replace("-", "−");
}

function round(value: number): number {
  return Math.round(value * 100) / 100;
}

export function escapeText(text: string): string {
  return text.replaceAll("&", "&amp;").replaceAll("<", "&lt;").replaceAll(">", "&gt;").replaceAll('"', "&quot;");
}

/** A short name that is the same for the same picture: two plots of one page must not share a clip path. */
function hash(text: string): string {
  let h = 2166136261;
  for (let i = 0; i < text.length; i++) h = Math.imul(h ^ text.charCodeAt(i), 16777619);
  return (h >>> 0).toString(36);
}
