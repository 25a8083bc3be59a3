import { css, html, LitElement, nothing } from "lit";
import type { SetAsideAlarm } from "../../core/messages/index.ts";
import { api } from "../data/api.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { baseStyle } from "./base-style.ts";
import "./priority-mark.ts";

/** One alarm that annunciates nothing at present: why, until when, by whom, whether its condition holds all the same, and the way back. */
export class SetAsideRow extends LitElement {
  static override properties = {
    alarm: { attribute: false },
    name: { attribute: false },
    now: { attribute: false },
    time: { attribute: false },
    failed: { state: true },
  };
  declare alarm: SetAsideAlarm;
  /** of the stream */
  declare name: string;
  declare now: number;
  declare time: PlantTime;
  declare failed: string | undefined;
  static override styles = [
    baseStyle,
    css`
      article {
        display: flex;
        flex-wrap: wrap;
        align-items: baseline;
        gap: 4px 12px;
        padding: 8px 0;
        border-bottom: 1px solid var(--rule);
      }
      mill-priority-mark {
        align-self: center;
      }
      .why {
        flex: 1 1 40ch;
      }
    `,
  ];

  override render() {
    const { alarm, name } = this;
    return html`<article>
      <mill-priority-mark .priority=${alarm.priority} calm></mill-priority-mark>
      <h3>${name}: ${alarm.title}</h3>
      <span class="why">
        ${this.#why()}
        ${
          alarm.active
            ? html`<b>Its condition holds all the same${alarm.says ? html`: ${alarm.says}` : nothing}</b>`
            : html`<span class="quiet">Its condition does not hold.</span>`
        }
        ${this.failed ? html`<b role="alert">Not done: ${this.failed}</b>` : nothing}
      </span>
      ${alarm.shelved ? html`<button @click=${() => this.#bringBack("unshelve")}>Unshelve</button>` : nothing}
      ${
        alarm.outOfService
          ? html`<button @click=${() => this.#bringBack("return-to-service")}>Return to service</button>`
          : nothing
      }
    </article>`;
  }

  #why() {
    const { now, time } = this;
    const { shelved, suppressed, outOfService } = this.alarm;
    const whole = (at: number) => html`<span class="whole" title=${time.full(at)}>${time.brief(at, now)}</span>`;
    return html`
      ${
        outOfService
          ? html`Out of service since ${whole(outOfService.at)}${outOfService.until ? html` until ${whole(outOfService.until)}` : nothing},
              ${outOfService.by}: ${outOfService.reason}. `
          : nothing
      }
      ${suppressed ? html`Suppressed by design since ${whole(suppressed.since)}: the line is ${suppressed.state}. ` : nothing}
      ${
        shelved
          ? html`Shelved until ${whole(shelved.until)}
              (<span class="whole">${duration(shelved.until - now)}</span>)${shelved.once ? ", or until it clears" : ""},
              ${shelved.by}: ${shelved.reason}. `
          : nothing
      }
    `;
  }

  async #bringBack(command: "unshelve" | "return-to-service"): Promise<void> {
    this.failed = undefined;
    try {
      await api.alarmCommand(this.alarm, command);
    } catch (error) {
      this.failed = (error as Error).message;
    }
  }
}
customElements.define("mill-set-aside-row", SetAsideRow);
