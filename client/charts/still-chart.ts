import { css, html, LitElement, type PropertyValues, unsafeCSS } from "lit";
import type uPlot from "uplot";
import uplotStyle from "uplot/dist/uPlot.min.css?inline";
import { type Colours, coloursAt } from "./colours.ts";
import { Redraw } from "./redraw.ts";

/** What a chart is drawn into, CSS px. */
export interface Ground {
  width: number;
  height: number;
  root: HTMLElement;
  colours: Colours;
}

/** A chart that is looked at and not pointed into: drawn anew when what it shows, its size, the theme or the fonts change. Words stand for it. */
export abstract class StillChart extends LitElement {
  static override properties = { label: { attribute: false } };
  /** what it shows, for those who do not see it */
  declare label: string;
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
        height: 240px;
        overflow: hidden;
      }
      .plot {
        position: absolute;
        inset: 0;
        pointer-events: none;
      }
      .uplot {
        font-family: inherit;
      }
    `,
  ];

  /** Draws what there is to show; undefined while there is nothing. */
  protected abstract draw(ground: Ground): uPlot | undefined;

  override render() {
    return html`<div class="plot" role="img" aria-label=${this.label ?? ""}></div>`;
  }

  override updated(_changed: PropertyValues): void {
    this.#build(true);
  }

  #build(always: boolean): void {
    if (!this.hasUpdated || !this.isConnected) return;
    const { width, height } = this.getBoundingClientRect();
    const size = `${width} ${height}`;
    if (width < 60 || (size === this.#size && !always)) return;
    this.#size = size;
    this.#plot?.destroy();
    const root = this.renderRoot.querySelector(".plot") as HTMLElement;
    this.#plot = this.draw({ width: Math.floor(width), height: Math.floor(height), root, colours: coloursAt(this) });
  }
}
