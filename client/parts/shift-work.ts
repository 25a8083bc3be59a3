import { css, html, LitElement, nothing } from "lit";
import type { ActionLine, BoundRecord, CheckLine, Write } from "../../core/messages/index.ts";
import { api } from "../data/api.ts";
import { Told } from "../data/told.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { baseStyle } from "./base-style.ts";
import { formStyle } from "./form-style.ts";

/** What is to be done: required checks to tick, actions to close. Fires `written`. */
export class ShiftWork extends LitElement {
  static override properties = { bound: { attribute: false }, time: { attribute: false } };
  declare bound: BoundRecord;
  declare time: PlantTime;
  readonly #told = new Told(this);
  static override styles = [
    baseStyle,
    formStyle,
    css`
      li {
        display: grid;
        grid-template-columns: 1fr auto;
        gap: 2px 8px;
        align-items: center;
        padding: 6px 0;
        border-bottom: 1px solid var(--rule);
      }
    `,
  ];

  override render() {
    const { checks, actions } = this.bound.record;
    const open = actions.filter(({ number, closed }) => closed === null && !this.#isClosed(number));
    if (checks.length === 0 && open.length === 0) return nothing;
    return html`
      <h2>To be done</h2>
      <ul>
        ${checks.map((check) => this.#check(check))} ${open.map((action) => this.#action(action))}
      </ul>
      ${this.#told.trouble ? html`<p role="alert">It was not taken. ${this.#told.trouble}</p>` : nothing}
    `;
  }

  #check({ key, says }: CheckLine) {
    // The newest word, also where the record is frozen with an older one.
    const entry = this.bound.entries.findLast((each) => each.kind === "check" && each.check === key);
    const done = entry?.kind === "check" && entry.outcome === "done";
    const write = (outcome: "done" | "not done"): Write => ({ kind: "check", check: key, outcome });
    return html`<li>
      <span>${says}${entry ? html`<br /><span class="quiet">${done ? "done" : "not done"}, ${entry.by}, ${this.#when(entry.at)}</span>` : nothing}</span>
      <button ?disabled=${this.#told.busy} @click=${() => this.#send(write(done ? "not done" : "done"))}>
        ${done ? "Undo" : "Done"}<span class="unseen">: ${says}</span>
      </button>
    </li>`;
  }

  #action({ number, says, owner, due }: ActionLine) {
    return html`<li>
      <span>${says}<br /><span class="quiet">Action ${number} for ${owner}${due === undefined ? nothing : html`, due ${this.#when(due)}`}</span></span>
      <button ?disabled=${this.#told.busy} @click=${() => this.#send({ kind: "action closed", refers: number })}>
        Close<span class="unseen"> action ${number}</span>
      </button>
    </li>`;
  }

  #isClosed(number: number): boolean {
    return this.bound.entries.some((entry) => entry.kind === "action closed" && entry.refers === number);
  }

  #when(at: number): string {
    return this.time.brief(at, this.bound.record.to);
  }

  async #send(write: Write): Promise<void> {
    const sent = await this.#told.send(() => api.writeToShift(this.bound.record.shift.from, write));
    if (sent) this.dispatchEvent(new CustomEvent("written"));
  }
}
customElements.define("mill-shift-work", ShiftWork);
