import { css, html, LitElement, nothing } from "lit";
import type { RecordedEvent, Said } from "../../core/messages/index.ts";
import { entryText, entryTitle } from "../../core/shift-page/index.ts";
import { href } from "../app/route.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted } from "../words/quantity.ts";
import { baseStyle } from "./base-style.ts";

/** What people said with the words that were looked for, newest first. */
export class SaidList extends LitElement {
  static override properties = {
    said: { attribute: false },
    words: { attribute: false },
    time: { attribute: false },
    now: { attribute: false },
  };
  declare said: Said;
  declare words: string;
  declare time: PlantTime;
  declare now: number;
  static override styles = [
    baseStyle,
    css`
      li {
        padding: 6px 0;
        border-bottom: 1px solid var(--rule);
      }
    `,
  ];

  override render() {
    const { events, count } = this.said;
    const more = count - events.length;
    return html`<p role="status">
        ${count === 0 ? html`Nobody has said “${this.words}”. Every word has to be there, or one that begins with it.` : html`“${this.words}”: said ${counted(count, "time")}.`}
      </p>
      <ul>
        ${events.map((event) => this.#line(event))}
      </ul>
      ${more > 0 ? html`<p class="quiet">and ${counted(more, "older one")}: add a word to find them.</p>` : nothing}`;
  }

  #line({ at, says, by, handover }: RecordedEvent) {
    return html`<li>
      <a href=${href({ view: "handover", at: handover?.shift ?? at })} title=${this.time.full(at)}>${this.time.brief(at, this.now)}</a>
      <span class="quiet">${by}${handover ? `, ${entryTitle(handover)}` : nothing}:</span> ${handover ? entryText(handover) : says}
    </li>`;
  }
}
customElements.define("mill-said-list", SaidList);
