import { css, html, LitElement, nothing } from "lit";
import type { Shift } from "../../core/messages/index.ts";
import { edges, isLive, presets, span, type TimeWindow } from "../data/time-window.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { baseStyle } from "./base-style.ts";
import "./range-entry.ts";

export type RangeWish =
  | { kind: "span"; spanMs: number }
  | { kind: "pan"; share: number }
  | { kind: "zoom"; factor: number }
  | { kind: "since"; from: number }
  | { kind: "between"; from: number; to: number }
  | { kind: "live" }
  | { kind: "stop" };

/** Which stretch of time is on the screen, and whether it is the present. */
export class RangeBar extends LitElement {
  static override properties = {
    window: { attribute: false },
    now: { attribute: false },
    time: { attribute: false },
    linkUp: { attribute: false },
    lastReadingAt: { attribute: false },
    shift: { attribute: false },
  };
  declare window: TimeWindow;
  declare now: number;
  declare time: PlantTime;
  declare linkUp: boolean;
  /** when the newest reading of any stream came */
  declare lastReadingAt: number | undefined;
  /** that is on now, once it is known */
  declare shift: Shift | undefined;
  static override styles = [
    baseStyle,
    css`
      .bar {
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 6px 12px;
        min-height: 44px;
        padding: 6px 0;
      }
      .group {
        display: flex;
        flex-wrap: wrap;
        gap: 4px;
      }
      .group button {
        padding: 2px 10px;
      }
      .here {
        border: 1px solid var(--ink);
        border-radius: 4px;
        background: var(--ink);
        color: var(--lane);
        min-height: 28px;
        padding: 2px 10px;
      }
      .state {
        margin-left: auto;
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 4px 12px;
      }
      .stopped {
        flex-basis: 100%;
        border: 3px dashed var(--ink);
        border-radius: 6px;
        padding: 6px 14px;
        font-size: 16px;
        background: var(--lane);
        justify-content: space-between;
      }
      .stopped button {
        background: var(--ink);
        color: var(--lane);
        border-color: var(--ink);
      }
    `,
  ];

  override render() {
    const { window, now, time, shift } = this;
    const spanMs = span(window, now);
    const { from, to } = edges(window, now);
    const wish = (detail: RangeWish) => () => this.#wish(detail);
    const ofShift = window.kind === "since" && window.from === shift?.from;
    const preset = ofShift || (window.kind !== "since" && presets.some((each) => each.spanMs === spanMs));
    return html`<div class="bar">
      <div class="group" role="group" aria-label="Time on the screen">
        ${presets.map(
          (each) =>
            html`<button aria-pressed=${window.kind !== "since" && each.spanMs === spanMs} @click=${wish({ kind: "span", spanMs: each.spanMs })}>
              ${each.name}
            </button>`,
        )}
        ${
          shift?.staffed
            ? html`<button
                aria-pressed=${ofShift}
                title="${shift.name}, since ${time.brief(shift.from, now)}"
                @click=${wish({ kind: "since", from: shift.from })}
              >
                this shift
              </button>`
            : nothing
        }
        ${preset ? nothing : html`<span class="here">${duration(spanMs)}</span>`}
        <mill-range-entry
          .from=${from}
          .to=${to}
          .now=${now}
          .time=${time}
          @range-typed=${({ detail }: CustomEvent<{ from: number; to: number }>) => this.#wish({ kind: "between", ...detail })}
        ></mill-range-entry>
      </div>
      <div class="group" role="group" aria-label="Move through time">
        <button @click=${wish({ kind: "pan", share: -0.5 })} title="Half a screen earlier">◂ earlier</button>
        <button
          @click=${wish({ kind: "pan", share: 0.5 })}
          ?disabled=${isLive(window)}
          title="Half a screen later"
        >
          later ▸
        </button>
        <button @click=${wish({ kind: "zoom", factor: 0.5 })} title="Show half the time">closer</button>
        <button @click=${wish({ kind: "zoom", factor: 2 })} title="Show twice the time">wider</button>
      </div>
      ${isLive(window) ? this.#live(wish) : this.#stopped(to, wish)}
    </div>`;
  }

  #wish(detail: RangeWish): void {
    this.dispatchEvent(new CustomEvent<RangeWish>("range-wish", { detail, bubbles: true, composed: true }));
  }

  #live(wish: (detail: RangeWish) => () => void) {
    const { now, lastReadingAt, linkUp } = this;
    const words = !linkUp
      ? "Not live: link lost"
      : lastReadingAt === undefined
        ? "Live · no reading yet"
        : `Live · last reading ${duration(now - lastReadingAt)} ago`;
    return html`<div class="state">
      <span class="quiet">${words}</span><button @click=${wish({ kind: "stop" })}>Stop here</button>
    </div>`;
  }

  #stopped(to: number, wish: (detail: RangeWish) => () => void) {
    const { now, time } = this;
    return html`<div class="state stopped">
      <span class="unseen" role="status">The trends are stopped, not live.</span>
      <span
        ><b>Trends are not live:</b> stopped at <span class="whole">${time.exact(to, now)}</span>,
        <span class="whole">${duration(now - to)}</span> before now. ${this.linkUp ? "Numbers and alarms are still the present ones." : "The link is lost, too: nothing here is current."}</span
      >
      <button @click=${wish({ kind: "live" })}>Back to live</button>
    </div>`;
  }
}
customElements.define("mill-range-bar", RangeBar);
