import { css, html, LitElement, nothing } from "lit";
import type { LabResult } from "../../core/messages/index.ts";
import { href } from "../app/route.ts";
import { api } from "../data/api.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { fixed, thin } from "../words/quantity.ts";
import { baseStyle } from "./base-style.ts";

/** One result with its prediction, what was done to it, and what an engineer can do. */
export class LabRow extends LitElement {
  static override properties = {
    result: { attribute: false },
    time: { attribute: false },
    now: { attribute: false },
    decimals: { attribute: false },
    /** why it does not count; undefined when it does */
    apart: { attribute: false },
    mayChange: { type: Boolean },
    failed: { state: true },
    sending: { state: true },
  };
  declare result: LabResult;
  declare time: PlantTime;
  declare now: number;
  declare decimals: number;
  declare apart: string | undefined;
  declare mayChange: boolean;
  declare failed: string | undefined;
  declare sending: boolean;

  static override styles = [
    baseStyle,
    css`
      :host {
        border-top: 1px solid var(--rule);
        padding: 6px 0;
      }
      .line {
        display: grid;
        grid-template-columns: minmax(9em, 1fr) repeat(3, minmax(6em, 8em)) minmax(14em, 3fr);
        gap: 2px 12px;
        align-items: baseline;
      }
      .number {
        text-align: right;
        white-space: nowrap;
      }
      .number small {
        display: block;
        color: var(--quiet);
        font-size: 13px;
      }
      s {
        color: var(--quiet);
      }
      form {
        display: flex;
        flex-wrap: wrap;
        gap: 8px;
        align-items: end;
        padding: 4px 0;
      }
      label {
        display: grid;
        gap: 2px;
      }
      .failed {
        font-weight: 700;
      }
      .about > a {
        display: inline-block;
        min-height: 24px;
      }
      summary {
        min-width: 24px;
      }
      @media (max-width: 700px) {
        .line {
          grid-template-columns: repeat(3, 1fr);
        }
        .when,
        .about {
          grid-column: 1 / -1;
        }
      }
    `,
  ];

  override render() {
    const { result, time, now, decimals } = this;
    const { property, value, unit, pair, withdrawn, stream, method, sample, by } = result;
    const number = (shown: number) => `${fixed(shown, decimals)}${thin}${unit}`;
    return html`<article aria-label="${property} of ${time.brief(result.time, now)}">
      <div class="line">
        <span class="when" title=${time.full(result.time)}
          >${time.brief(result.time, now)}<br /><span class="quiet">${[sample, method, by].filter(Boolean).join(", ")}</span></span
        >
        <span class="number"><small>laboratory</small>${withdrawn ? html`<s>${number(value)}</s>` : number(value)}</span>
        <span class="number"><small>predicted</small>${pair.predicted === null ? "—" : number(pair.predicted)}</span>
        <span class="number"><small>difference</small>${this.#counts() && pair.predicted !== null ? number(pair.predicted - value) : "—"}</span>
        <div class="about">
          ${this.#about()}
          <a href=${href({ view: "reading", stream, at: pair.to })}>Reading</a>
          ${this.mayChange && !withdrawn ? this.#change() : nothing}
        </div>
      </div>
      ${this.failed ? html`<p class="failed" role="alert">Not done: ${this.failed}</p>` : nothing}
    </article>`;
  }

  #counts(): boolean {
    return this.apart === undefined;
  }

  #about() {
    const { result, apart, time, now } = this;
    const { pair, changes, unit } = result;
    const model =
      apart === "another model" ? "Another model predicted it: it does not count for the one in charge." : "";
    return html`${pair.says || model ? html`<p>${pair.says} ${model}</p>` : nothing}
    ${changes.map(
      ({ kind, was, by, at, reason }) =>
        html`<p><b>${kind}</b>${kind === "corrected" ? ` (it was ${was}${thin}${unit})` : ""} by ${by}, ${time.brief(at, now)}: ${reason}</p>`,
    )}`;
  }

  #change() {
    return html`<details>
      <summary>Correct or withdraw</summary>
      <form @submit=${this.#correct} aria-label="Correct">
        <label>Right value (${this.result.unit}) <input name="value" required inputmode="decimal" size="9" autocomplete="off" /></label>
        <label>Why it is corrected <input name="reason" required maxlength="2000" /></label>
        <button ?disabled=${this.sending}>Correct it</button>
      </form>
      <form @submit=${this.#withdraw} aria-label="Withdraw">
        <label>Why it is withdrawn <input name="reason" required maxlength="2000" /></label>
        <button ?disabled=${this.sending}>Withdraw it</button>
      </form>
      <p class="quiet">Nothing is deleted: what it was stays on record, with who, when and why.</p>
    </details>`;
  }

  #correct(event: SubmitEvent): void {
    const { value, reason, result } = this.#asked(event);
    if (!Number.isFinite(value)) {
      this.failed = "the value is no number. Write it with a point, as 7.25.";
      return;
    }
    void this.#send(() => api.correctLab(this.result.stream, { result, value, reason }));
  }

  #withdraw(event: SubmitEvent): void {
    const { reason, result } = this.#asked(event);
    void this.#send(() => api.withdrawLab(this.result.stream, { result, reason }));
  }

  #asked(event: SubmitEvent) {
    event.preventDefault();
    const form = new FormData(event.target as HTMLFormElement);
    const { property, time, method, sample } = this.result;
    const value = String(form.get("value") ?? "").trim();
    return {
      result: { property, time, method, sample },
      reason: String(form.get("reason")),
      value: value === "" ? Number.NaN : Number(value),
    };
  }

  async #send(ask: () => Promise<unknown>): Promise<void> {
    this.sending = true;
    this.failed = undefined;
    try {
      await ask();
      this.dispatchEvent(new CustomEvent("entered", { bubbles: true, composed: true }));
    } catch (error) {
      this.failed = (error as Error).message;
    }
    this.sending = false;
  }
}
customElements.define("mill-lab-row", LabRow);
