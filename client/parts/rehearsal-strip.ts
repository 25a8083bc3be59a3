import { css, html, LitElement, nothing, svg } from "lit";
import type { Outcome, RehearsalResult, Span } from "../../core/rehearsal/index.ts";
import { href } from "../app/route.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted } from "../words/quantity.ts";
import { baseStyle } from "./base-style.ts";

const width = 1000;
const left = 92;
const right = 990;
const rows = { truth: 20, inForce: 48, proposed: 76 };
const height = 112;
/** More marks than this are a smear, and slow: the table above says how many there are. */
const mostMarks = 600;

/**
 * Calls of two limit sets on one time axis, over the labelled troubles. A mark leads to its reading. Dragged over, it tells "stretch-cut" with
 * from and to.
 */
export class RehearsalStrip extends LitElement {
  static override properties = {
    result: { attribute: false },
    cuts: { attribute: false },
    time: { attribute: false },
    dragged: { state: true },
  };
  declare result: RehearsalResult;
  declare cuts: readonly Span[];
  declare time: PlantTime;
  declare dragged: [number, number] | undefined;

  static override styles = [
    baseStyle,
    css`
      svg {
        display: block;
        width: 100%;
        height: auto;
        min-width: 640px;
        touch-action: pan-x;
        cursor: crosshair;
      }
      .scrolls {
        overflow-x: auto;
      }
      text {
        fill: var(--quiet);
        font-size: 12px;
      }
      .axis {
        stroke: var(--edge);
      }
      .truth {
        fill: var(--tone);
        stroke: var(--edge);
      }
      .call {
        fill: none;
        stroke: var(--ink);
        stroke-width: 1.5;
      }
      .causeless {
        fill: var(--ink);
      }
      .cut {
        fill: url(#hatch);
        stroke: var(--edge);
      }
      a:focus-visible .call {
        stroke: var(--focus);
        stroke-width: 4;
      }
    `,
  ];

  override render() {
    const { result, cuts, dragged, time } = this;
    const { from, to } = result.stretch;
    const ticks = Array.from({ length: 6 }, (_, i) => from + ((to - from) * i) / 5);
    return html`<div class="scrolls" tabindex="0" role="region" aria-label="Calls over time"><svg
        viewBox="0 0 ${width} ${height}"
        role="group"
        aria-label="Calls over time: labelled troubles, limits in force, proposed limits"
        @pointerdown=${this.#down}
        @pointermove=${this.#move}
        @pointerup=${this.#up}
      >
        <defs>
          <pattern id="hatch" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
            <line class="axis" x1="0" y1="0" x2="0" y2="6" />
          </pattern>
        </defs>
        ${result.truth.map(
          (event) =>
            svg`<rect class="truth" x=${this.#x(event.from)} y=${rows.truth - 10} width=${Math.max(2, this.#x(event.to) - this.#x(event.from))} height="78"><title>${event.label}: ${event.kind}, ${time.brief(event.from, to)}</title></rect>`,
        )}
        ${[...cuts].map((cut) => this.#hatched(cut))} ${dragged ? this.#hatched(spanOf(dragged)) : nothing}
        <text x="0" y=${rows.truth + 4}>troubles</text>
        <text x="0" y=${rows.inForce + 4}>in force</text>
        <text x="0" y=${rows.proposed + 4}>proposed</text>
        ${this.#marks(result.inForce, rows.inForce)} ${result.proposed ? this.#marks(result.proposed, rows.proposed) : nothing}
        ${svg`<line class="axis" x1=${left} x2=${width} y1="92" y2="92" />`}
        ${ticks.map(
          (at, i) =>
            svg`<text x=${this.#x(at)} y="106" text-anchor=${i === 0 ? "start" : i === 5 ? "end" : "middle"}>${time.brief(at, to + 2 * 86_400_000)}</text>`,
        )}
      </svg></div>
      <p class="quiet">
        A filled mark is a call that no labelled trouble explains; a hollow one has a trouble under it, or is about the analyzer itself. Follow a mark to its reading. Drag to
        leave a stretch out.
      </p>`;
  }

  #marks({ calls, causeless }: Outcome, y: number) {
    const without = new Set(causeless.map(({ key, raisedAt }) => `${key} ${raisedAt}`));
    const { stream, to } = this.result.stretch;
    const shown = calls.slice(0, mostMarks);
    return svg`${shown.map(({ key, raisedAt }) => {
      const x = this.#x(raisedAt);
      const cause = without.has(`${key} ${raisedAt}`) ? "no labelled trouble" : "explained";
      const name = `${key}, ${this.time.brief(raisedAt, to + 2 * 86_400_000)}, ${cause}`;
      return svg`<a href=${href({ view: "reading", stream, at: raisedAt })} aria-label=${name}><path class="call ${cause === "explained" ? "" : "causeless"}" d="M${x} ${y - 9}l5 9l-5 9l-5 -9Z"><title>${name}</title></path></a>`;
    })}${
      calls.length > shown.length
        ? svg`<text x=${width} y=${y - 12} text-anchor="end">and ${counted(calls.length - shown.length, "more call")} not drawn</text>`
        : nothing
    }`;
  }

  #hatched({ from, to }: Span) {
    return svg`<rect class="cut" x=${this.#x(from)} y="6" width=${Math.max(1, this.#x(to) - this.#x(from))} height="86"><title>left out</title></rect>`;
  }

  #x(at: number): number {
    const { from, to } = this.result.stretch;
    return left + (width - left) * Math.min(1, Math.max(0, (at - from) / Math.max(1, to - from)));
  }

  #at(event: PointerEvent): number {
    const box = (event.currentTarget as SVGElement).getBoundingClientRect();
    const { from, to } = this.result.stretch;
    const x = ((event.clientX - box.left) / box.width) * width;
    return from + (to - from) * Math.min(1, Math.max(0, (x - left) / (right - left)));
  }

  #down(event: PointerEvent): void {
    if ((event.target as Element).closest("a")) return;
    this.dragged = [this.#at(event), this.#at(event)];
    (event.currentTarget as Element).setPointerCapture(event.pointerId);
  }

  #move(event: PointerEvent): void {
    if (this.dragged) this.dragged = [this.dragged[0], this.#at(event)];
  }

  #up(): void {
    const { dragged } = this;
    this.dragged = undefined;
    if (!dragged) return;
    const span = spanOf(dragged);
    const { from, to } = this.result.stretch;
    if (span.to - span.from < (to - from) / 200) return; // a click, not a stretch
    this.dispatchEvent(new CustomEvent("stretch-cut", { detail: span, bubbles: true, composed: true }));
  }
}

function spanOf([a, b]: [number, number]): Span {
  return { from: Math.floor(Math.min(a, b)), to: Math.ceil(Math.max(a, b)) };
}

customElements.define("mill-rehearsal-strip", RehearsalStrip);
