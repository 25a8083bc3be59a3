import { css, html, LitElement, nothing } from "lit";
import type { OpenAlarm } from "../../core/messages/index.ts";
import { api } from "../data/api.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { baseStyle } from "./base-style.ts";
import { priorityColour } from "./priority-mark.ts";

/** One open alarm: what it is, since when, the evidence, what to do, and the button that says "I have seen it". */
export class AlarmCard extends LitElement {
  static override properties = {
    alarm: { attribute: false },
    now: { attribute: false },
    time: { attribute: false },
    full: { type: Boolean },
    linkUp: { attribute: false },
    sending: { state: true },
    failed: { state: true },
  };
  declare alarm: OpenAlarm;
  declare now: number;
  declare time: PlantTime;
  /** with cause, consequence and time to respond */
  declare full: boolean;
  declare linkUp: boolean;
  declare sending: boolean;
  declare failed: string | undefined;
  static override styles = [
    baseStyle,
    css`
      article {
        border-left: 4px solid;
        padding: 0 0 2px 10px;
      }
      h3 {
        display: flex;
        align-items: center;
        gap: 6px;
        flex-wrap: wrap;
        color: var(--ink);
      }
      h3 small {
        font-size: 13px;
        font-weight: 400;
      }
      p,
      dl {
        color: var(--ink);
        margin-top: 2px;
      }
      p.quiet {
        color: var(--quiet);
      }
      dt {
        color: var(--quiet);
        float: left;
        margin-right: 6px;
      }
      dt::after {
        content: ":";
      }
      button {
        margin-top: 6px;
      }
      .failed {
        font-weight: 700;
      }
    `,
  ];

  override render() {
    const { alarm } = this;
    const waits = alarm.state === "unacknowledged" || alarm.state === "returned unacknowledged";
    return html`<article style="border-color:var(${priorityColour[alarm.priority]})" aria-label="${alarm.priority} alarm: ${alarm.title}">
      <h3 style="--c:var(${priorityColour[alarm.priority]})">
        <mill-priority-mark .priority=${alarm.priority} ?filled=${waits}></mill-priority-mark>
        <span>${alarm.title}</span>
        <small style="color:var(${priorityColour[alarm.priority]})">${alarm.priority}</small>
      </h3>
      <p class="quiet">${this.#standing()}</p>
      <p>${alarm.says}</p>
      <p>${alarm.response}</p>
      ${this.full ? this.#purpose() : nothing}
      ${
        waits
          ? html`<button ?disabled=${this.sending || this.linkUp === false} @click=${this.#acknowledge}>
            ${this.sending ? "Acknowledging …" : "Acknowledge"}
          </button>`
          : nothing
      }
      ${this.failed ? html`<p class="failed" role="alert">Not acknowledged: ${this.failed}</p>` : nothing}
    </article>`;
  }

  #standing() {
    const { alarm, now, time } = this;
    const whole = (at: number) => html`<span class="whole" title=${time.full(at)}>${time.brief(at, now)}</span>`;
    const age = html`<span class="whole">${duration(now - alarm.raisedAt)}</span>`;
    switch (alarm.state) {
      case "acknowledged":
        return html`since ${whole(alarm.since)} · acknowledged
        ${alarm.acknowledgedAt ? whole(alarm.acknowledgedAt) : nothing}${alarm.acknowledgedBy ? `, ${alarm.acknowledgedBy}` : ""}`;
      case "returned unacknowledged":
        return html`raised ${whole(alarm.raisedAt)} · gone since
        ${alarm.clearedAt ? whole(alarm.clearedAt) : "then"} · not acknowledged`;
      default:
        return html`since ${whole(alarm.since)}, ${age} · not acknowledged`;
    }
  }

  #purpose() {
    const { cause, consequence, timeToRespondMinutes } = this.alarm;
    return html`<dl>
      <dt>Likely cause</dt>
      <dd>${cause}</dd>
      <dt>If nothing is done</dt>
      <dd>${consequence}</dd>
      <dt>Time to respond</dt>
      <dd>${duration(timeToRespondMinutes * 60_000)}</dd>
    </dl>`;
  }

  async #acknowledge(): Promise<void> {
    this.sending = true;
    this.failed = undefined;
    try {
      await api.acknowledge(this.alarm);
    } catch (error) {
      this.failed = (error as Error).message;
    }
    this.sending = false;
  }
}
customElements.define("mill-alarm-card", AlarmCard);
