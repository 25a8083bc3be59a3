import { css, html, LitElement, nothing } from "lit";
import type { SweepCell, Sweeping } from "../../core/rehearsal/index.ts";
import { figure } from "../words/quantity.ts";
import { settingWords } from "../words/setting-words.ts";
import { baseStyle } from "./base-style.ts";

/** Choices of two settings as a table: calls per day, and missed events under them. A choice that is pressed tells "choice-taken" with its values. */
export class SweepMap extends LitElement {
  static override properties = { sweep: { attribute: false }, cells: { attribute: false }, best: { attribute: false } };
  declare sweep: readonly Sweeping[];
  declare cells: readonly SweepCell[];
  declare best: readonly SweepCell[];

  static override styles = [
    baseStyle,
    css`
      td {
        padding: 2px 4px 2px 0;
        border: 0;
      }
      button {
        display: grid;
        gap: 0;
        min-width: 64px;
        justify-items: start;
        line-height: 1.2;
        padding: 2px 8px;
      }
      .best {
        border: 3px double var(--ink);
        font-weight: 700;
      }
      .scrolls {
        overflow-x: auto;
      }
    `,
  ];

  override render() {
    const [first, second] = this.sweep;
    const isBest = ({ x, y }: SweepCell) => this.best.some((cell) => cell.x === x && cell.y === y);
    const at = (x: number, y: number) => this.cells.find((cell) => cell.x === x && cell.y === y);
    return html`<div class="scrolls" tabindex="0" role="region" aria-label="Sweep">
      <table>
        <caption>Across: ${settingWords(first.setting)}. ${second ? html`Down: ${settingWords(second.setting)}.` : nothing} In each: calls per day / missed troubles. A double frame: no other choice has both fewer.</caption>
        <thead>
          <tr>
            <th></th>
            ${first.values.map((value) => html`<th scope="col">${figure(value, 4)}</th>`)}
          </tr>
        </thead>
        <tbody>
          ${(second?.values ?? [Number.NaN]).map(
            (value, y) => html`<tr>
              <th scope="row">${second ? figure(value, 4) : nothing}</th>
              ${first.values.map((_, x) => {
                const cell = at(x, y);
                if (!cell) return html`<td>…</td>`;
                const best = isBest(cell);
                return html`<td>
                  <button
                    class=${best ? "best" : ""}
                    aria-label="${figure(cell.perDay, 3)} calls per day, ${cell.missed} missed${best ? ", among the best" : ""}; take over"
                    @click=${() => this.#take(x, y)}
                  >
                    ${figure(cell.perDay, 3)} <span class="quiet">/ ${cell.missed}</span>
                  </button>
                </td>`;
              })}
            </tr>`,
          )}
        </tbody>
      </table>
    </div>`;
  }

  #take(x: number, y: number): void {
    const [first, second] = this.sweep;
    const values = [first.values[x], ...(second ? [second.values[y]] : [])];
    this.dispatchEvent(new CustomEvent("choice-taken", { detail: values, bubbles: true, composed: true }));
  }
}

customElements.define("mill-sweep-map", SweepMap);
