import { css, html, LitElement, nothing } from "lit";
import type { BoundRecord, HandoverShifts, Plant, SigningSide, Write } from "../../core/messages/index.ts";
import { type HandoverStanding, handoverStanding, meanings } from "../../core/shift-page/index.ts";
import { api } from "../data/api.ts";
import { Told } from "../data/told.ts";
import { baseStyle } from "./base-style.ts";
import { formStyle } from "./form-style.ts";

/** Hands a shift over: the outgoing side signs, the incoming asks or objects, and signs. Fires `written`. */
export class ShiftSigning extends LitElement {
  static override properties = {
    bound: { attribute: false },
    person: { attribute: false },
    invented: { attribute: false },
    now: { attribute: false },
  };
  declare bound: BoundRecord;
  declare person: Plant["person"];
  declare invented: HandoverShifts["invented"];
  declare now: number;
  readonly #signing = new Told(this);
  readonly #asking = new Told(this);
  static override styles = [
    baseStyle,
    formStyle,
    css`
      .pair {
        display: flex;
        flex-wrap: wrap;
        gap: 8px;
      }
      .meaning {
        border-left: 4px solid var(--edge);
        padding-left: 8px;
      }
    `,
  ];

  override render() {
    const standing = handoverStanding(this.bound.entries);
    return html`
      <h2>Hand over</h2>
      ${this.#says(standing)}
      ${standing.unanswered.map(
        (asked) => html`<form @submit=${(event: SubmitEvent) => this.#answer(event, asked.number)}>
          <label>Answer to the ${asked.kind} of ${asked.by}: ${asked.says} <textarea name="says" required maxlength="2000"></textarea></label>
          <button ?disabled=${this.#asking.busy}>Answer</button>
        </form>`,
      )}
      ${standing.is === "offered" ? this.#questions() : nothing}
      ${this.#asking.trouble ? html`<p role="alert">It was not taken. ${this.#asking.trouble}</p>` : nothing}
      ${standing.is === "open" ? this.#sign("outgoing") : nothing} ${standing.is === "offered" ? this.#sign("incoming") : nothing}
      ${
        standing.is === "offered"
          ? html`<details>
              <summary>Sign anew as the outgoing side, with what was added since</summary>
              ${this.#sign("outgoing")}
            </details>`
          : nothing
      }
      ${
        this.invented.length > 0 && standing.is !== "taken over"
          ? html`<p class="quiet">
              This plant is invented, and so are its people:
              ${this.invented.map(({ name, password }) => html`<br />${name}, password <b>${password}</b>`)}
            </p>`
          : nothing
      }
    `;
  }

  #says({ is, outgoing, incoming }: HandoverStanding) {
    const runs = this.now < this.bound.record.shift.to;
    if (is === "taken over") return html`<p>${outgoing!.by} has handed over, ${incoming!.by} has taken over.</p>`;
    if (is === "offered")
      return html`<p>${outgoing!.by} has signed. The incoming side reads the record, asks or objects, and signs.</p>`;
    return html`<p>
      ${runs ? "The shift runs. Signed before its end, the record tells up to that moment; the rest goes into the next one." : "Nobody has signed this shift."}
    </p>`;
  }

  #questions() {
    return html`<form @submit=${this.#ask}>
      <label>Ask the outgoing side, or object <textarea name="says" required maxlength="2000"></textarea></label>
      <span class="pair">
        <button name="kind" value="question" ?disabled=${this.#asking.busy}>Ask</button>
        <button name="kind" value="objection" ?disabled=${this.#asking.busy}>Object</button>
      </span>
    </form>`;
  }

  #sign(side: SigningSide) {
    const known = this.person.signedIn && side === "outgoing" ? this.person.name : "";
    return html`<form autocomplete="off" @submit=${(event: SubmitEvent) => this.#signAs(event, side)}>
      <h3>${side === "outgoing" ? "Outgoing side" : "Incoming side"}</h3>
      <p class="meaning">${meanings[side]}</p>
      <label>Name <input name="name" required maxlength="200" autocomplete="off" .value=${known} /></label>
      <label>Password, again <input name="password" type="password" required autocomplete="off" /></label>
      ${this.#signing.trouble ? html`<p role="alert">Not signed. ${this.#signing.trouble}</p>` : nothing}
      <button ?disabled=${this.#signing.busy}>Sign as the ${side} side</button>
    </form>`;
  }

  async #signAs(event: SubmitEvent, side: SigningSide): Promise<void> {
    event.preventDefault();
    const form = event.target as HTMLFormElement;
    const data = new FormData(form);
    const { record, hash: seen } = this.bound;
    const name = String(data.get("name")).trim();
    const password = String(data.get("password"));
    const done = await this.#signing.send(() =>
      api.signShift({ shift: record.shift.from, side, seen, name, password }),
    );
    (form.elements.namedItem("password") as HTMLInputElement).value = "";
    if (done) form.reset();
    // Also where it was refused: the other side may have signed meanwhile.
    this.dispatchEvent(new CustomEvent("written"));
  }

  #ask(event: SubmitEvent): void {
    const kind = (event.submitter as HTMLButtonElement).value === "objection" ? "objection" : "question";
    void this.#write(event, (says) => ({ kind, says }));
  }

  #answer(event: SubmitEvent, refers: number): void {
    void this.#write(event, (says) => ({ kind: "answer", refers, says }));
  }

  async #write(event: SubmitEvent, write: (says: string) => Write): Promise<void> {
    event.preventDefault();
    const form = event.target as HTMLFormElement;
    const says = String(new FormData(form).get("says")).trim();
    if (!(await this.#asking.send(() => api.writeToShift(this.bound.record.shift.from, write(says))))) return;
    form.reset();
    this.dispatchEvent(new CustomEvent("written"));
  }
}
customElements.define("mill-shift-signing", ShiftSigning);
