import { css, html, LitElement } from "lit";
import { repeat } from "lit/directives/repeat.js";
import type { PlantStream } from "../../core/messages/index.ts";
import { groupsOf, type LanePlaces, moved, regrouped } from "../data/lane-order.ts";
import { baseStyle } from "./base-style.ts";

/** Order and grouping of the lanes, by buttons and names; tells "lanes-arranged" with the new places after every change. */
export class LaneArranger extends LitElement {
  static override properties = { places: { attribute: false }, streams: { attribute: false } };
  /** of all streams, as they are on the screen */
  declare places: LanePlaces;
  declare streams: readonly PlantStream[];
  static override styles = [
    baseStyle,
    css`
      .card {
        margin-bottom: 8px;
      }
      table {
        width: auto;
        margin: 8px 0;
      }
      td {
        padding-block: 4px;
      }
      .moves {
        display: flex;
        gap: 4px;
      }
      .foot {
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 8px 16px;
      }
    `,
  ];

  override render() {
    const groups = groupsOf(this.places).filter(({ name }) => name !== "");
    return html`<section class="card" aria-label="Arrange the lanes">
      <h2>Arrange the lanes</h2>
      <p class="quiet">Lanes that are given the same group stand together under its name. The order is yours: others keep theirs.</p>
      <div class="scrolls" tabindex="0" role="region" aria-label="Lanes in their order">
        <table>
          <thead>
            <tr>
              <th scope="col">Lane</th>
              <th scope="col">Place</th>
              <th scope="col">Group</th>
            </tr>
          </thead>
          <tbody>
            ${repeat(
              this.places,
              ({ stream }) => stream,
              (place, i) => this.#row(place, i),
            )}
          </tbody>
        </table>
      </div>
      <datalist id="groups">${groups.map(({ name }) => html`<option value=${name}></option>`)}</datalist>
      <div class="foot">
        <button @click=${() => this.#tell([])}>The plant's own order</button>
        <button @click=${() => this.dispatchEvent(new CustomEvent("arranging-done"))}>Done</button>
      </div>
    </section>`;
  }

  #row({ stream, group }: LanePlaces[number], index: number) {
    const name = this.streams.find(({ id }) => id === stream)?.name ?? stream;
    const move = (by: -1 | 1) => () => this.#tell(moved(this.places, stream, by));
    return html`<tr>
      <td>${name} <span class="quiet">${stream}</span></td>
      <td>
        <span class="moves">
          <button aria-label="${name}: up" ?disabled=${index === 0} @click=${move(-1)}>▴</button>
          <button aria-label="${name}: down" ?disabled=${index === this.places.length - 1} @click=${move(1)}>▾</button>
        </span>
      </td>
      <td>
        <input
          aria-label="${name}: group"
          list="groups"
          maxlength="60"
          placeholder="none"
          .value=${group}
          @change=${(event: Event) =>
            this.#tell(regrouped(this.places, stream, (event.target as HTMLInputElement).value.trim()))}
        />
      </td>
    </tr>`;
  }

  #tell(detail: LanePlaces): void {
    this.dispatchEvent(new CustomEvent<LanePlaces>("lanes-arranged", { detail }));
  }
}
customElements.define("mill-lane-arranger", LaneArranger);
