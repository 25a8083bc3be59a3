import { html, LitElement, nothing } from "lit";
import type { BoundRecord, NoteSubject, Write } from "../../core/messages/index.ts";
import { handoverStanding } from "../../core/shift-page/index.ts";
import { api } from "../data/api.ts";
import { Told } from "../data/told.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { baseStyle } from "./base-style.ts";
import { formStyle } from "./form-style.ts";

const hour = 3_600_000;
/** When an action is to be done, from now; nobody wants to type a date at the end of a night. */
const dues = [
  { word: "no set time", ms: undefined },
  { word: "within 2 h", ms: 2 * hour },
  { word: "within 8 h", ms: 8 * hour },
  { word: "within 24 h", ms: 24 * hour },
  { word: "within 7 days", ms: 7 * 24 * hour },
];

/** Adds a note or an action to a shift's record. Fires `written`. */
export class ShiftWriting extends LitElement {
  static override properties = { bound: { attribute: false }, time: { attribute: false }, now: { attribute: false } };
  declare bound: BoundRecord;
  declare time: PlantTime;
  declare now: number;
  readonly #note = new Told(this);
  readonly #action = new Told(this);
  static override styles = [baseStyle, formStyle];

  override render() {
    const frozen = handoverStanding(this.bound.entries).is === "taken over";
    return html`
      <h2>Add to this shift</h2>
      ${frozen ? html`<p class="quiet">Both sides have signed: what is added stands beside the record, as an amendment.</p>` : nothing}
      <form @submit=${this.#addNote}>
        <label
          >Note about
          <select name="about">
            ${this.#subjects().map(({ value, word }) => html`<option value=${value}>${word}</option>`)}
          </select></label
        >
        <label>Note <textarea name="says" required maxlength="2000"></textarea></label>
        ${this.#note.trouble ? html`<p role="alert">The note was not taken. ${this.#note.trouble}</p>` : nothing}
        <button ?disabled=${this.#note.busy}>Add the note</button>
      </form>
      <form @submit=${this.#addAction}>
        <label>Action for the next shift <textarea name="says" required maxlength="2000"></textarea></label>
        <label>Owner <input name="owner" required maxlength="200" placeholder="a person or a team" /></label>
        <label
          >Due
          <select name="due">
            ${dues.map(({ word }, i) => html`<option value=${i}>${word}</option>`)}
          </select></label
        >
        ${this.#action.trouble ? html`<p role="alert">The action was not taken. ${this.#action.trouble}</p>` : nothing}
        <button ?disabled=${this.#action.busy}>Add the action</button>
      </form>
    `;
  }

  /** What a note may be about: the shift, its streams, its excursions, its alarms. */
  #subjects(): { value: string; word: string }[] {
    const { streams, excursions, alarms } = this.bound.record;
    const name = (stream: string) => streams.find((each) => each.stream === stream)?.name ?? stream;
    const subject = (about: NoteSubject, word: string) => ({ value: JSON.stringify(about), word });
    return [
      subject({ kind: "shift" }, "the shift"),
      ...streams.map(({ stream }) => subject({ kind: "stream", stream }, name(stream))),
      ...excursions.map(({ stream, id, kind, start }) =>
        subject(
          { kind: "excursion", stream, id },
          `${name(stream)}: ${kind} at ${this.time.brief(start, this.bound.record.to)}`,
        ),
      ),
      ...alarms.list.map(({ stream, key, title }) =>
        subject({ kind: "alarm", stream, key }, `${name(stream)}: alarm ${title}`),
      ),
    ];
  }

  #addNote(event: SubmitEvent): void {
    const form = new FormData(event.target as HTMLFormElement);
    const about = JSON.parse(String(form.get("about"))) as NoteSubject;
    void this.#write(event, this.#note, { kind: "note", about, says: String(form.get("says")).trim() });
  }

  #addAction(event: SubmitEvent): void {
    const form = new FormData(event.target as HTMLFormElement);
    const { ms } = dues[Number(form.get("due"))];
    void this.#write(event, this.#action, {
      kind: "action",
      says: String(form.get("says")).trim(),
      owner: String(form.get("owner")).trim(),
      ...(ms === undefined ? {} : { due: Math.round(this.now + ms) }),
    });
  }

  async #write(event: SubmitEvent, told: Told, write: Write): Promise<void> {
    event.preventDefault();
    const form = event.target as HTMLFormElement;
    if (!(await told.send(() => api.writeToShift(this.bound.record.shift.from, write)))) return;
    form.reset();
    this.dispatchEvent(new CustomEvent("written"));
  }
}
customElements.define("mill-shift-writing", ShiftWriting);
