import { css, html, LitElement, nothing } from "lit";
import type { LabImport, PlantProperty } from "../../core/messages/index.ts";
import { api } from "../data/api.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted } from "../words/quantity.ts";
import { typedTime, typedTimeForm } from "../words/typed-time.ts";
import { baseStyle } from "./base-style.ts";

/** Results of the laboratory on their way in: one by a form, many by a table. Tells "entered" when some were taken. */
export class LabEntry extends LitElement {
  static override properties = {
    stream: { attribute: false },
    properties: { attribute: false },
    property: { attribute: false },
    time: { attribute: false },
    now: { attribute: false },
    mayImport: { type: Boolean },
    outcome: { state: true },
    failed: { state: true },
    sending: { state: true },
  };
  declare stream: string;
  declare properties: readonly PlantProperty[];
  /** the one that is shown */
  declare property: string;
  declare time: PlantTime;
  declare now: number;
  declare mayImport: boolean;
  declare outcome: LabImport | undefined;
  declare failed: string | undefined;
  declare sending: boolean;

  static override styles = [
    baseStyle,
    css`
      form {
        display: flex;
        flex-wrap: wrap;
        gap: 8px 12px;
        align-items: end;
        margin-bottom: 8px;
      }
      label {
        display: grid;
        gap: 2px;
      }
      .rows {
        margin: 8px 0 0;
        max-height: 40vh;
        overflow: auto;
      }
      .failed {
        font-weight: 700;
      }
    `,
  ];

  override render() {
    return html`
      <form @submit=${this.#enter} aria-label="Enter a result">
        <label>Property
          <select name="property">
            ${this.properties.map(({ name }) => html`<option ?selected=${name === this.property}>${name}</option>`)}
          </select></label>
        <label>Sample drawn at (${this.time.zone})
          <input name="time" required autocomplete="off" spellcheck="false" placeholder=${typedTimeForm} size="19" /></label>
        <label>Value <input name="value" required inputmode="decimal" autocomplete="off" size="9" /></label>
        <label>Unit
          <input name="unit" required autocomplete="off" size="6" .value=${this.properties[0]?.unit ?? ""} /></label>
        <label>Method <input name="method" maxlength="100" size="16" /></label>
        <label>Sample's name <input name="sample" maxlength="100" size="12" /></label>
        <button ?disabled=${this.sending}>Enter it</button>
      </form>
      ${
        this.mayImport
          ? html`<form aria-label="A table of results">
              <label>Import a table (CSV: time, property, value, unit; method, sample, by)
                <input type="file" accept=".csv,text/csv" ?disabled=${this.sending} @change=${this.#import} /></label>
            </form>`
          : html`<p class="quiet">Tables are brought in, and results corrected or withdrawn, by an engineer.</p>`
      }
      ${this.failed ? html`<p class="failed" role="alert">Not taken. ${this.failed}</p>` : nothing}
      ${this.outcome ? this.#told(this.outcome) : nothing}
    `;
  }

  #told({ done, accepted, repeated, refused, rows }: LabImport) {
    if (done) {
      const there = repeated > 0 ? `, ${repeated} already there` : "";
      const [only] = rows.length === 1 ? rows : [];
      return html`<p role="status">${counted(accepted, "result")} taken${there}. ${only?.says ?? ""}</p>`;
    }
    return html`<div role="alert">
      <p class="failed">Nothing was taken: ${refused} of ${counted(rows.length, "row")} cannot be. Correct and send again.</p>
      <div class="rows scrolls" tabindex="0" role="region" aria-label="Rows">
        <table>
          <thead>
            <tr><th scope="col" class="number">Line</th><th scope="col">Outcome</th><th scope="col">Why</th></tr>
          </thead>
          <tbody>
            ${rows.map(
              ({ row, outcome, says }) => html`<tr>
                <td class="number">${row}</td>
                <td class="whole">${outcome === "accepted" ? "good" : outcome}</td>
                <td>${says}</td>
              </tr>`,
            )}
          </tbody>
        </table>
      </div>
    </div>`;
  }

  #enter(event: SubmitEvent): void {
    event.preventDefault();
    const form = event.target as HTMLFormElement;
    const data = new FormData(form);
    const text = (name: string) => String(data.get(name) ?? "").trim();
    const at = typedTime(text("time"), this.time, this.now);
    const value = text("value") === "" ? Number.NaN : Number(text("value"));
    if (at === undefined) {
      this.#refuse(`“${text("time")}” is no time here. Write it as ${typedTimeForm}.`);
      return;
    }
    if (!Number.isFinite(value)) {
      this.#refuse(`“${text("value")}” is no number. Write it with a point, as 7.25.`);
      return;
    }
    const result = {
      ...{ time: at, property: text("property"), value, unit: text("unit") },
      ...{ method: text("method"), sample: text("sample") },
    };
    void this.#send(() => api.enterLab(this.stream, result), form);
  }

  #import(event: Event): void {
    const input = event.target as HTMLInputElement;
    const [file] = input.files ?? [];
    if (!file) return;
    void this.#send(async () => {
      const table = await file.text();
      input.value = ""; // the same file, mended, may be chosen again
      return api.importLab(this.stream, table);
    });
  }

  #refuse(says: string): void {
    this.outcome = undefined;
    this.failed = says;
  }

  async #send(ask: () => Promise<LabImport>, form?: HTMLFormElement): Promise<void> {
    this.sending = true;
    this.outcome = undefined;
    this.failed = undefined;
    try {
      this.outcome = await ask();
      if (this.outcome.done) {
        form?.reset();
        this.dispatchEvent(new CustomEvent("entered", { bubbles: true, composed: true }));
      }
    } catch (error) {
      this.failed = (error as Error).message;
    }
    this.sending = false;
  }
}
customElements.define("mill-lab-entry", LabEntry);
