import { css, html, LitElement, nothing } from "lit";
import { repeat } from "lit/directives/repeat.js";
import type { OpenAlarm, Plant, RecordedEvent } from "../../core/messages/index.ts";
import { href } from "../app/route.ts";
import { byUrgency, calling, isWaiting } from "../data/alarm-order.ts";
import { api } from "../data/api.ts";
import type { Feed } from "../data/feed.ts";
import { Listening, ticking } from "../data/listening.ts";
import { Loaded } from "../data/loaded.ts";
import { centredOn } from "../data/time-window.ts";
import "./alarm-figures.ts";
import "../parts/alarm-card.ts";
import "../parts/set-aside-row.ts";
import { baseStyle } from "../parts/base-style.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted } from "../words/quantity.ts";

const listed = 100;

/** What needs me now, and what happened lately? */
export class AlarmsView extends LitElement {
  static override properties = {
    plant: { attribute: false },
    feed: { attribute: false },
    time: { attribute: false },
    chosen: { state: true },
    filter: { state: true },
    failed: { state: true },
  };
  declare plant: Plant;
  declare feed: Feed;
  declare time: PlantTime;
  /** alarms that are ticked to be acknowledged together, as "stream key" */
  declare chosen: ReadonlySet<string>;
  /** of the record */
  declare filter: { stream: string; about: string };
  declare failed: string | undefined;
  #cursor = -1;
  readonly #recent = new Loaded(this, (key, signal) => {
    const [stream, about] = key.split(" ");
    return api.events({ limit: listed, stream: stream || undefined, about: about || undefined }, signal);
  });

  constructor() {
    super();
    this.chosen = new Set();
    this.filter = { stream: "", about: "" };
    ticking(this);
    new Listening(this, (changed) =>
      this.feed?.watch(() => {
        this.#heard();
        changed();
      }),
    );
  }

  static override styles = [
    baseStyle,
    css`
      h1 {
        padding: 12px 0;
      }
      .columns {
        display: grid;
        grid-template-columns: repeat(auto-fill, minmax(min(100%, 360px), 1fr));
        gap: 8px;
      }
      .columns section {
        display: grid;
        gap: 8px;
        align-content: start;
      }
      .of {
        display: flex;
        gap: 6px;
        align-items: center;
        flex-wrap: wrap;
      }
      .record {
        margin-top: 8px;
      }
      .record h2 {
        margin-bottom: 8px;
      }
      .head {
        display: flex;
        flex-wrap: wrap;
        gap: 4px 16px;
        align-items: baseline;
      }
      .tick {
        margin-left: auto;
        min-width: 24px;
        min-height: 24px;
        display: grid;
        place-items: center;
      }
      .tick input {
        width: 18px;
        height: 18px;
      }
      .together {
        padding-bottom: 8px;
      }
      td.words {
        min-width: 28ch;
      }
      @media (max-width: 700px) {
        /* on a narrow screen an entry is a paragraph, so that its words are in sight */
        .record table,
        .record tbody,
        .record tr {
          display: block;
        }
        .record thead {
          display: none;
        }
        .record tr {
          border-bottom: 1px solid var(--rule);
          padding: 6px 0;
        }
        .record td {
          display: inline;
          border: 0;
          padding: 0 8px 0 0;
        }
      }
      .old td {
        color: var(--quiet);
      }
    `,
  ];

  override render() {
    const { feed } = this;
    const now = feed.now();
    const open = byUrgency(feed.alarms());
    const waiting = open.filter((alarm) => isWaiting(alarm) && alarm.priority !== "record only").length;
    this.#recent.want(`${this.filter.stream} ${this.filter.about}`);
    return html`
      <h1>
        Alarms${
          open.length
            ? html`: ${counted(open.filter(({ priority }) => priority !== "record only").length, "open alarm", "open alarms")}, ${waiting}
            not acknowledged`
            : nothing
        }
      </h1>
      ${
        !feed.linkUp && feed.everUp
          ? html`<p class="card"><b>Old:</b> the link is lost, so this is what was open when it was last heard.</p>`
          : nothing
      }
      ${
        open.length === 0
          ? html`<p class="card">
            ${feed.everUp ? "No alarm is open. What needs a person will stand here, most urgent first, with what to do." : "Waiting for the live link …"}
          </p>`
          : nothing
      }
      ${this.#together(open)}
      <div class="columns">
        ${calling.map((priority) => {
          const held = open.filter((alarm) => alarm.priority === priority);
          // Keyed: when the order changes under a hand, what is ticked or half typed stays with its alarm.
          return repeat(held, keyOf, (alarm) => this.#card(alarm, now));
        })}
      </div>
      ${this.#setAside(now)} ${this.#record(now)}
      <mill-alarm-figures class="record" .plant=${this.plant} .now=${now} .time=${this.time}></mill-alarm-figures>
    `;
  }

  #card(alarm: OpenAlarm, now: number) {
    const { plant, time, feed } = this;
    const name = plant.streams.find(({ id }) => id === alarm.stream)?.name ?? alarm.stream;
    const window = centredOn({ kind: "live", spanMs: 3_600_000 }, alarm.since, now);
    return html`<section class="card">
      <h2 class="of">${name} <small class="quiet">${alarm.stream}</small> ${isWaiting(alarm) ? this.#tick(alarm, name) : nothing}</h2>
      <mill-alarm-card .alarm=${alarm} .now=${now} .time=${time} .linkUp=${feed.linkUp} full ?engineer=${mayTakeOut.has(plant.person.role)}></mill-alarm-card>
      <p>
        <a href=${href({ view: "watch", window, stream: alarm.stream })}>On Watch</a> ·
        <a href=${href({ view: "reading", stream: alarm.stream, at: alarm.raisedAt })}>Reading when it was raised</a>
      </p>
    </section>`;
  }

  #tick(alarm: OpenAlarm, name: string) {
    const key = keyOf(alarm);
    return html`<label class="tick"
      ><input type="checkbox" aria-label="Choose ${name}: ${alarm.title}" .checked=${this.chosen.has(key)} @change=${() => this.#toggle(key)}
    /></label>`;
  }

  #toggle(key: string): void {
    const chosen = new Set(this.chosen);
    if (!chosen.delete(key)) chosen.add(key);
    this.chosen = chosen;
  }

  /** Several that were each looked at and ticked; there is no "all" without looking. */
  #together(open: readonly OpenAlarm[]) {
    const ticked = open.filter((alarm) => isWaiting(alarm) && this.chosen.has(keyOf(alarm)));
    return html`${
      ticked.length > 0
        ? html`<p class="together">
            <button ?disabled=${!this.feed.linkUp} @click=${() => this.#acknowledge(ticked)}>Acknowledge the ${ticked.length} chosen</button>
          </p>`
        : nothing
    }
    ${this.failed ? html`<p class="card" role="alert">Not done: ${this.failed}</p>` : nothing}`;
  }

  async #acknowledge(alarms: readonly OpenAlarm[]): Promise<void> {
    this.failed = undefined;
    const outcomes = await Promise.allSettled(alarms.map((alarm) => api.alarmCommand(alarm, "acknowledge")));
    const failures = outcomes.flatMap((outcome) =>
      outcome.status === "rejected" ? [(outcome.reason as Error).message] : [],
    );
    if (failures.length > 0) this.failed = failures.join(" ");
    this.chosen = new Set();
  }

  #setAside(now: number) {
    const { plant, feed, time } = this;
    const aside = plant.streams.flatMap(({ id, name }) =>
      (feed.of(id)?.setAside ?? []).map((alarm) => ({ alarm, name })),
    );
    if (aside.length === 0) return nothing;
    return html`<section class="card record">
      <h2>Set aside: these say nothing at present</h2>
      ${aside.map(
        ({ alarm, name }) =>
          html`<mill-set-aside-row .alarm=${alarm} .name=${name} .now=${now} .time=${time}></mill-set-aside-row>`,
      )}
    </section>`;
  }

  #record(now: number) {
    const { value, error } = this.#recent;
    return html`<section class="card record">
      <div class="head">
        <h2>What happened lately</h2>
        ${this.#filters()}
      </div>
      ${error ? html`<p role="status">The record could not be read. ${error.message}</p>` : nothing}
      ${value && value.events.length === 0 ? html`<p class="quiet">Nothing is on record yet.</p>` : nothing}
      ${
        value && value.events.length > 0
          ? html`<div class="scrolls" tabindex="0" role="region" aria-label="What happened lately">
            <table>
              <thead>
                <tr>
                  <th scope="col">Time, ${this.time.zoneName(now)}</th>
                  <th scope="col">Stream</th>
                  <th scope="col">What</th>
                  <th scope="col">In words</th>
                  <th scope="col">By</th>
                </tr>
              </thead>
              <tbody>
                ${byTime(value.events).map((event) => this.#event(event, now))}
              </tbody>
            </table>
          </div>`
          : nothing
      }
    </section>`;
  }

  #filters() {
    const { stream, about } = this.filter;
    const choose = (part: "stream" | "about") => (event: Event) => {
      this.filter = { ...this.filter, [part]: (event.target as HTMLSelectElement).value };
    };
    return html`
      <select aria-label="Stream" @change=${choose("stream")}>
        <option value="" ?selected=${stream === ""}>all streams</option>
        ${this.plant.streams.map(({ id, name }) => html`<option value=${id} ?selected=${id === stream}>${name}</option>`)}
      </select>
      <select aria-label="What" @change=${choose("about")}>
        ${Object.entries(subjects).map(([word, name]) => html`<option value=${word} ?selected=${word === about}>${name}</option>`)}
      </select>
    `;
  }

  #event({ at, stream, kind, says, by, history }: RecordedEvent, now: number) {
    return html`<tr class=${history ? "old" : ""}>
      <td class="whole" title=${this.time.full(at)}>${this.time.exact(at, now)}</td>
      <td class="whole">${stream ?? "service"}</td>
      <td class="whole">${kind}${history ? " (history)" : ""}</td>
      <td class="words">${says}</td>
      <td class="whole">${by ?? ""}</td>
    </tr>`;
  }

  #heard(): void {
    const newest = this.feed.events.at(-1)?.cursor ?? 0;
    if (newest === this.#cursor) return;
    this.#cursor = newest;
    this.#recent.refresh();
  }
}
/** The record is kept in the order in which things became known; recorded history becomes known late. People read by time. A copy. */
function byTime(events: readonly RecordedEvent[]): RecordedEvent[] {
  return [...events].sort((a, b) => b.at - a.at || b.cursor - a.cursor);
}

const mayTakeOut = new Set(["engineer", "administrator"]);

/** The first words of the kinds of events. */
const subjects = {
  "": "everything",
  alarm: "alarms",
  excursion: "excursions",
  limits: "limits",
  process: "process states",
  service: "service",
  signed: "sign-ins",
};

function keyOf({ stream, key }: OpenAlarm): string {
  return `${stream} ${key}`;
}

customElements.define("mill-alarms-view", AlarmsView);
