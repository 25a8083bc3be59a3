import { css, html, LitElement, type PropertyValues, unsafeCSS } from "lit";
import uPlot from "uplot";
import uplotStyle from "uplot/dist/uPlot.min.css?inline";
import { figure, grouped } from "../words/quantity.ts";
import { chartFont } from "./canvas-text.ts";
import { coloursAt } from "./colours.ts";
import { drawPanel, drawPanelGround, type PanelPen } from "./panel-drawing.ts";
import { type PanelPicture, panelRange } from "./panel-picture.ts";
import { Redraw } from "./redraw.ts";
import { valueTicks } from "./value-ticks.ts";

/** One panel over the wavelengths. Panels of a view share the cursor; "point-wavelength" tells where it is. */
export class SpectrumPanel extends LitElement {
  static override properties = {
    picture: { attribute: false },
    cursor: { attribute: false },
    label: { attribute: false },
    withAxis: { attribute: false },
    domain: { attribute: false },
  };
  declare picture: PanelPicture;
  /** position on the axis, its unit */
  declare cursor: number | undefined;
  declare label: string;
  /** panels above one another share the axis of the lowest */
  declare withAxis: boolean;
  /** first and last point that all panels show */
  declare domain: [number, number];
  #plot: uPlot | undefined;
  #size = "";
  constructor() {
    super();
    new Redraw(
      this,
      (always) => this.#build(always),
      () => {
        this.#plot?.destroy();
        this.#plot = undefined;
        this.#size = "";
      },
    );
  }

  static override styles = [
    unsafeCSS(uplotStyle),
    css`
      :host {
        display: block;
        position: relative;
        height: clamp(116px, 14vh, 220px);
        overflow: hidden;
      }
      :host([tall]) {
        height: clamp(176px, 20vh, 300px);
      }
      .plot {
        position: absolute;
        inset: 0;
      }
      .plot:focus-visible {
        outline: 3px solid var(--focus);
        outline-offset: -3px;
      }
      .u-hz .u-cursor-x {
        border-right: 1px solid var(--ink);
      }
      .uplot {
        font-family: inherit;
      }
    `,
  ];

  /** what is drawn, for a picture that is saved */
  get canvas(): HTMLCanvasElement | null {
    return this.renderRoot.querySelector("canvas");
  }

  override render() {
    return html`<div class="plot" role="application" aria-roledescription="chart" tabindex="0" aria-label=${this.label ?? ""} @keydown=${this.#key}></div>`;
  }

  override updated(changed: PropertyValues<this>): void {
    if (changed.has("picture") || changed.has("domain")) this.#build(true);
    else if (changed.has("cursor")) this.#placeCursor();
  }

  #build(always = false): void {
    if (!this.picture || !this.hasUpdated || !this.isConnected) return;
    const { width, height } = this.getBoundingClientRect();
    const size = `${width} ${height}`;
    if (width < 60 || height < 40 || (size === this.#size && !always)) return;
    this.#size = size;
    this.#plot?.destroy();
    const root = this.renderRoot.querySelector(".plot") as HTMLElement;
    const colours = coloursAt(this);
    const pen = (u: uPlot): PanelPen => ({
      ctx: u.ctx,
      ratio: uPlot.pxRatio,
      ...u.bbox,
      x: (point) => u.valToPos(point, "x", true),
      y: (value) => u.valToPos(value, "y", true),
      colours,
    });
    const [low, high] = panelRange(this.picture);
    const narrow = width < 520;
    const axis = { font: chartFont, gap: 3, stroke: colours.quiet, grid: { show: false } };
    const ticks = { show: true, size: 4, width: 1, stroke: colours.rule };
    const plot = new uPlot(
      {
        width: Math.floor(width),
        height: Math.floor(height),
        padding: [4, narrow ? 76 : 96, 0, 0],
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
        scales: { x: { time: false, range: () => this.domain }, y: { range: () => [low, high] } },
        series: [{}, { paths: () => null, points: { show: false } }],
        axes: [
          {
            ...axis,
            ticks,
            size: this.withAxis ? 20 : 4,
            values: (_, splits) => (this.withAxis ? splits.map(grouped) : []),
          },
          {
            ...axis,
            ticks,
            size: 64,
            splits: () => valueTicks(low, high, Math.max(4, Math.floor(height / 30))),
            values: (_, splits) => splits.map((value) => figure(value, 4)),
          },
        ],
        hooks: {
          drawClear: [(u) => drawPanelGround(pen(u), this.picture)],
          draw: [(u) => drawPanel(pen(u), this.picture)],
        },
      },
      [[...this.picture.axis], this.picture.axis.map(() => null)],
      root,
    );
    this.#plot = plot;
    plot.over.addEventListener("pointermove", (event) => {
      const box = plot.over.getBoundingClientRect();
      this.#point(plot.posToVal(event.clientX - box.left, "x"));
    });
    plot.over.addEventListener("pointerleave", () => this.#point(undefined));
    this.#placeCursor();
  }

  #placeCursor(): void {
    const shown = this.cursor !== undefined;
    this.#plot?.setCursor(
      { left: shown ? this.#plot.valToPos(this.cursor as number, "x") : -10, top: shown ? 0 : -10 },
      false,
    );
  }

  #point(at: number | undefined): void {
    this.dispatchEvent(
      new CustomEvent<number | undefined>("point-wavelength", { detail: at, bubbles: true, composed: true }),
    );
  }

  #key(event: KeyboardEvent): void {
    const [from, to] = this.domain;
    const here = this.cursor ?? (from + to) / 2;
    const step = ((to - from) / 300) * (event.shiftKey ? 10 : 1);
    const target = { ArrowLeft: here - step, ArrowRight: here + step, Home: from, End: to }[event.key];
    if (event.key === "Escape") this.#point(undefined);
    else if (target === undefined) return;
    else this.#point(Math.min(to, Math.max(from, target)));
    event.preventDefault();
  }
}
customElements.define("mill-spectrum-panel", SpectrumPanel);
