import { css, html, LitElement, type PropertyValues, unsafeCSS } from "lit";
import uPlot from "uplot";
import uplotStyle from "uplot/dist/uPlot.min.css?inline";
import type { PlantTime } from "../words/plant-time.ts";
import { type Colours, coloursAt, onTheme } from "./colours.ts";
import { listenForGestures } from "./gestures.ts";
import { drawGround, drawLane, type LanePicture, type Pen } from "./lane-drawing.ts";
import { laneLayout } from "./lane-layout.ts";
import { laneOptions } from "./lane-options.ts";

/** What the person did on the chart; the view that owns the window answers. */
export type ChartGesture =
  | { kind: "pan"; share: number }
  | { kind: "zoom"; factor: number; about: number }
  | { kind: "point"; at: number | undefined }
  | { kind: "open"; at: number };

/** One stream's trend and trust ribbon over time. Draws `picture`; tells gestures as "chart-gesture" events. */
export class LaneChart extends LitElement {
  static override properties = {
    picture: { attribute: false },
    version: { attribute: false },
    cursor: { attribute: false },
    time: { attribute: false },
    label: { attribute: false },
  };
  declare picture: LanePicture;
  /** goes up when the arrays inside the picture have changed */
  declare version: number;
  declare cursor: number | undefined;
  declare time: PlantTime;
  /** the sentence that stands for the picture where it cannot be seen */
  declare label: string;
  #plot: uPlot | undefined;
  #colours: Colours | undefined;
  /** what the plot was built for: another property or size takes another plot */
  #built = "";
  #drawn = "";
  #stale = true;
  #visible = true;
  #stop: (() => void)[] = [];
  static override styles = [
    unsafeCSS(uplotStyle),
    css`
      :host {
        display: block;
        position: relative;
        height: 100%;
        min-height: 180px;
        overflow: hidden;
      }
      :host([upper]) {
        min-height: 104px;
      }
      .plot {
        position: absolute;
        inset: 0;
        cursor: crosshair;
      }
      .plot:focus-visible {
        outline: 3px solid var(--focus);
        outline-offset: -3px;
        border-radius: 4px;
      }
      .u-hz .u-cursor-x {
        border-right: 1px solid var(--ink);
      }
      .uplot {
        font-family: inherit;
      }
    `,
  ];

  override render() {
    return html`<div
      class="plot"
      tabindex="0"
      role="application"
      aria-roledescription="trend"
      aria-label=${this.label ?? ""}
      @keydown=${this.#key}
    ></div>`;
  }

  override connectedCallback(): void {
    super.connectedCallback();
    const resized = new ResizeObserver(() => this.#draw(true));
    resized.observe(this);
    const seen = new IntersectionObserver(([entry]) => {
      this.#visible = entry.isIntersecting;
      if (this.#visible) this.#draw();
    });
    seen.observe(this);
    this.#stop = [
      () => resized.disconnect(),
      () => seen.disconnect(),
      onTheme(() => {
        this.#colours = undefined;
        this.#draw(true);
      }),
    ];
    void document.fonts.ready.then(() => this.#draw(true));
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback();
    for (const stop of this.#stop) stop();
    this.#plot?.destroy();
    this.#plot = undefined;
    this.#drawn = "";
  }

  override updated(changed: PropertyValues<this>): void {
    if (changed.has("picture") || changed.has("version")) this.#draw();
    if (changed.has("cursor")) this.#placeCursor();
  }

  /** Draws when a pixel would change, and only while it is on the screen. */
  #draw(always = false): void {
    const { picture } = this;
    if (!picture || !this.isConnected || !this.hasUpdated) return;
    const box = this.getBoundingClientRect();
    if (box.width < 60 || box.height < 60) return;
    const perPx = (picture.to - picture.from) / box.width;
    const key = [
      Math.round(picture.to / Math.max(perPx, 500)),
      Math.round(picture.to - picture.from),
      this.version,
      picture.live,
      picture.old,
      picture.property.name,
      picture.marks.length,
      picture.lab.length,
      picture.lab[0]?.at,
    ].join(" ");
    this.#stale = this.#stale || always || key !== this.#drawn;
    if (!this.#stale || !this.#visible) return;
    const rebuilt = `${picture.property.name} ${picture.foot} ${box.width} ${box.height}`;
    if (this.#built !== rebuilt || !this.#plot) {
      this.#build(box.width, box.height);
      this.#built = rebuilt;
    }
    this.#stale = false;
    this.#drawn = key;
    const trend = picture.trend;
    this.#plot?.setData(trend ? [trend.time, trend.properties[picture.property.name]?.mean ?? []] : [[], []], false);
    this.#plot?.setScale("x", { min: picture.from, max: picture.to });
    this.#placeCursor();
  }

  #build(width: number, height: number): void {
    const root = this.renderRoot.querySelector(".plot") as HTMLElement;
    this.#plot?.destroy();
    const options = laneOptions({
      width: Math.floor(width),
      height: Math.floor(height),
      scale: this.picture.property.scale,
      foot: this.picture.foot,
      window: () => ({ from: this.picture.from, to: this.picture.to }),
      time: this.time,
      colour: (name) => this.#palette()[name],
      drawGround: (u) => drawGround(this.#pen(u), this.picture),
      drawLane: (u) => drawLane(this.#pen(u), this.picture),
    });
    const plot = new uPlot(options, [[], []], root);
    this.#plot = plot;
    const at = (share: number) => plot.posToVal(share * plot.over.clientWidth, "x");
    listenForGestures(plot.over, {
      pan: (share) => this.#tell({ kind: "pan", share }),
      zoom: (factor, share) => this.#tell({ kind: "zoom", factor, about: at(share) }),
      point: (share) => this.#tell({ kind: "point", at: share === undefined ? undefined : at(share) }),
      open: (share) => this.#tell({ kind: "open", at: at(share) }),
    });
  }

  #palette(): Colours {
    this.#colours ??= coloursAt(this);
    return this.#colours;
  }

  #pen(u: uPlot): Pen {
    const ratio = uPlot.pxRatio;
    const { left, top, width } = u.bbox;
    const { from, to } = this.picture;
    const perMs = width / (to - from);
    const y0 = u.valToPos(0, "y", true);
    const perUnit = u.valToPos(1, "y", true) - y0;
    return {
      ctx: u.ctx,
      ratio,
      left,
      top,
      width,
      x: (at) => left + (at - from) * perMs,
      y: (value) => y0 + value * perUnit,
      layout: laneLayout(u.height, this.picture.foot),
      colours: this.#palette(),
    };
  }

  #placeCursor(): void {
    const plot = this.#plot;
    if (!plot || !this.picture) return;
    const { from, to } = this.picture;
    const at = this.cursor;
    const shown = at !== undefined && at >= from && at <= to;
    plot.setCursor({ left: shown ? plot.valToPos(at, "x") : -10, top: shown ? 0 : -10 }, false);
  }

  #tell(gesture: ChartGesture): void {
    this.dispatchEvent(
      new CustomEvent<ChartGesture>("chart-gesture", { detail: gesture, bubbles: true, composed: true }),
    );
  }

  #key(event: KeyboardEvent): void {
    if (event.ctrlKey || event.metaKey || event.altKey) return;
    const { from, to } = this.picture;
    const here = this.cursor ?? to;
    const step = ((to - from) / 100) * (event.shiftKey ? 10 : 1);
    const answers: Record<string, () => void> = {
      ArrowLeft: () => this.#tell({ kind: "point", at: Math.max(from, here - step) }),
      ArrowRight: () => this.#tell({ kind: "point", at: Math.min(to, here + step) }),
      Home: () => this.#tell({ kind: "point", at: from }),
      End: () => this.#tell({ kind: "point", at: to }),
      Escape: () => this.#tell({ kind: "point", at: undefined }),
      PageUp: () => this.#tell({ kind: "pan", share: -0.5 }),
      PageDown: () => this.#tell({ kind: "pan", share: 0.5 }),
      "+": () => this.#tell({ kind: "zoom", factor: 0.5, about: here }),
      "=": () => this.#tell({ kind: "zoom", factor: 0.5, about: here }),
      "-": () => this.#tell({ kind: "zoom", factor: 2, about: here }),
      Enter: () => this.#tell({ kind: "open", at: here }),
    };
    const answer = answers[event.key];
    if (!answer) return;
    event.preventDefault();
    answer();
  }
}
customElements.define("mill-lane-chart", LaneChart);
