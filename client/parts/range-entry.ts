import { css, html, LitElement, nothing } from "lit";
import { longestMs, shortestMs } from "../data/time-window.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { typedTime, typedTimeForm } from "../words/typed-time.ts";
import { baseStyle } from "./base-style.ts";

/** A stretch of time typed in by the plant's clock; tells "range-typed" with from and to, epoch ms. */
export class RangeEntry extends LitElement {
  static override properties = {
    from: { attribute: false },
    to: { attribute: false },
    now: { attribute: false },
    time: { attribute: false },
    open: { state: true },
    wrong: { state: true },
  };
  /** what is on the screen, as a beginning to type from */
  declare from: number;
  declare to: number;
  declare now: number;
  declare time: PlantTime;
  declare open: boolean;
  declare wrong: string | undefined;

  constructor() {
    super();
    this.open = false;
  }

  static override styles = [
    baseStyle,
    css`
      :host {
        display: contents;
      }
      form {
        flex-basis: 100%;
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 6px 12px;
      }
      input {
        width: 20ch;
      }
      .wrong {
        flex-basis: 100%;
        font-weight: 700;
      }
    `,
  ];

  override render() {
    return html`<button
        aria-expanded=${this.open}
        @click=${() => {
          this.open = !this.open;
          this.wrong = undefined;
        }}
      >
        from … to
      </button>
      ${this.open ? this.#form() : nothing}`;
  }

  #form() {
    const { time, from, to, wrong } = this;
    const typed = (at: number) => time.full(at).slice(0, typedTimeForm.length);
    const field = (name: string, word: string, at: number) =>
      html`<label>${word} <input name=${name} value=${typed(at)} autocomplete="off" spellcheck="false" aria-describedby="form" /></label>`;
    return html`<form @submit=${this.#submit}>
      ${field("from", "From", from)} ${field("to", "to", to)}
      <button>Show</button>
      <span class="quiet" id="form">${time.zone}, ${time.zoneName(to)}; ${typedTimeForm}, or 14:05 for today, or now</span>
      ${wrong ? html`<span class="wrong" role="alert">${wrong}</span>` : nothing}
    </form>`;
  }

  #submit(event: SubmitEvent): void {
    event.preventDefault();
    const form = new FormData(event.target as HTMLFormElement);
    const [from, to] = ["from", "to"].map((name) => this.#moment(String(form.get(name))));
    this.wrong = this.#faultOf(from, to);
    if (this.wrong !== undefined || typeof from === "string" || typeof to === "string") return;
    this.dispatchEvent(new CustomEvent("range-typed", { detail: { from, to }, bubbles: true, composed: true }));
    this.open = false;
  }

  /** What was typed as a moment, or what is wrong with it. */
  #moment(text: string): number | string {
    return typedTime(text, this.time, this.now) ?? `“${text}” is no time here. Write it as ${typedTimeForm}.`;
  }

  #faultOf(from: number | string, to: number | string): string | undefined {
    if (typeof from === "string") return from;
    if (typeof to === "string") return to;
    if (from >= this.now) return "That has not happened yet.";
    if (to - from < shortestMs) return `The end must be ${duration(shortestMs)} or more after the beginning.`;
    if (to - from > longestMs)
      return `That is ${duration(to - from)}; at most ${duration(longestMs)} are drawn at a time.`;
    return undefined;
  }
}
customElements.define("mill-range-entry", RangeEntry);
