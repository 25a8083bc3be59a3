import { css, html, LitElement, nothing } from "lit";
import type { OpenAlarm } from "../../core/messages/index.ts";
import { isWaiting } from "../data/alarm-order.ts";
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
    brief: { type: Boolean },
    engineer: { type: Boolean },
    linkUp: { attribute: false },
    sending: { state: true },
    failed: { state: true },
  };
  declare alarm: OpenAlarm;
  declare now: number;
  declare time: PlantTime;
  /** with cause, consequence and time to respond */
  declare full: boolean;
  /** evidence and response folded away: one that is gone, or one of many */
  declare brief: boolean;
  /** the person may take it out of service */
  declare engineer: boolean;
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
      .commands {
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 6px 12px;
        margin-top: 4px;
      }
      .commands details {
        margin: 0;
      }
      .commands details[open] {
        flex-basis: 100%;
      }
      details {
        color: var(--ink);
        margin-top: 4px;
      }
      form {
        display: grid;
        gap: 6px;
        justify-items: start;
        padding: 4px 0;
      }
      .failed {
        font-weight: 700;
      }
    `,
  ];

  override render() {
    const { alarm } = this;
    const waits = isWaiting(alarm);
    return html`<article style="border-color:var(${priorityColour[alarm.priority]})" aria-label="${alarm.priority} alarm: ${alarm.title}">
      <h3 style="--c:var(${priorityColour[alarm.priority]})">
        <mill-priority-mark .priority=${alarm.priority} ?filled=${waits}></mill-priority-mark>
        <span>${alarm.title}</span>
        <small style="color:var(${priorityColour[alarm.priority]})">${alarm.priority}</small>
      </h3>
      <p class="quiet">${this.#standing()}</p>
      ${this.brief ? nothing : this.#evidence()}
      ${this.full ? this.#purpose() : nothing}
      <div class="commands">
        ${
          this.brief
            ? html`<details>
                <summary>What to do</summary>
                ${this.#evidence()}
              </details>`
            : nothing
        }
        ${waits ? this.#button("acknowledge", "Acknowledge") : nothing}
        ${alarm.state === "latched acknowledged" ? this.#button("reset", "Reset") : nothing}
      </div>
      ${this.full ? this.#shelving() : nothing} ${this.full && this.engineer ? this.#outOfService() : nothing}
      ${this.failed ? html`<p class="failed" role="alert">Not done: ${this.failed}</p>` : nothing}
    </article>`;
  }

  #evidence() {
    return html`<p>${this.alarm.says}</p>
      <p>${this.alarm.response}</p>`;
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
      case "latched unacknowledged":
      case "latched acknowledged":
        return html`raised ${whole(alarm.raisedAt)} · gone since ${alarm.clearedAt ? whole(alarm.clearedAt) : "then"} · latched:
        ${isWaiting(alarm) ? "not acknowledged" : "waits for a reset"}`;
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

  #button(command: "acknowledge" | "reset", word: string) {
    return html`<button
      ?disabled=${this.sending || this.linkUp === false}
      @click=${() => this.#send(() => api.alarmCommand(this.alarm, command))}
    >
      ${this.sending ? "Sending …" : word}
    </button>`;
  }

  #shelving() {
    return html`<details>
      <summary>Shelve for a while</summary>
      <form @submit=${this.#shelve}>
        <label>Reason <input name="reason" required maxlength="2000" /></label>
        <label
          >For
          <select name="minutes">
            <option value="">this time only</option>
            <option value="30">30 min</option>
            <option value="60">1 h</option>
            <option value="240">4 h</option>
            <option value="480">8 h</option>
          </select></label
        >
        <button ?disabled=${this.sending || this.linkUp === false}>Shelve</button>
        <p class="quiet">It says nothing until then, and comes back by itself. It stays on the list below.</p>
      </form>
    </details>`;
  }

  #outOfService() {
    return html`<details>
      <summary>Take out of service</summary>
      <form @submit=${this.#takeOut}>
        <label>Reason <input name="reason" required maxlength="2000" /></label>
        <button ?disabled=${this.sending || this.linkUp === false}>Take it out</button>
        <p class="quiet">It says nothing until somebody returns it. What it would have said is on record.</p>
      </form>
    </details>`;
  }

  #takeOut(event: SubmitEvent): void {
    event.preventDefault();
    const reason = String(new FormData(event.target as HTMLFormElement).get("reason"));
    void this.#send(() => api.takeOutOfService(this.alarm, reason));
  }

  #shelve(event: SubmitEvent): void {
    event.preventDefault();
    const form = new FormData(event.target as HTMLFormElement);
    const minutes = Number(form.get("minutes"));
    const reason = String(form.get("reason"));
    void this.#send(() => api.shelve(this.alarm, minutes ? { reason, minutes } : { reason }));
  }

  async #send(command: () => Promise<unknown>): Promise<void> {
    this.sending = true;
    this.failed = undefined;
    try {
      await command();
    } catch (error) {
      this.failed = (error as Error).message;
    }
    this.sending = false;
  }
}
customElements.define("mill-alarm-card", AlarmCard);
