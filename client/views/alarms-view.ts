import { css, html, LitElement, nothing } from "lit";
import type { OpenAlarm, Plant, RecordedEvent } from "../../core/messages/index.ts";
import { href } from "../app/route.ts";
import { byUrgency, calling, isWaiting } from "../data/alarm-order.ts";
import { api } from "../data/api.ts";
import type { Feed } from "../data/feed.ts";
import { Listening, ticking } from "../data/listening.ts";
import { Loaded } from "../data/loaded.ts";
import { centredOn } from "../data/time-window.ts";
import { baseStyle } from "../parts/base-style.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted } from "../words/quantity.ts";

const listed = 100;

/** What needs me now, and what happened lately? */
export class AlarmsView extends LitElement {
  static override properties = { plant: { attribute: false }, feed: { attribute: false }, time: { attribute: false } };
  declare plant: Plant;
  declare feed: Feed;
  declare time: PlantTime;
  #cursor = -1;
  readonly #recent = new Loaded(this, (_, signal) => api.events({ limit: listed }, signal));

  constructor() {
    super();
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
    this.#recent.want("recent");
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
      <div class="columns">
        ${calling.map((priority) => {
          const held = open.filter((alarm) => alarm.priority === priority);
          return held.map((alarm) => this.#card(alarm, now));
        })}
      </div>
      ${this.#setAside(now)} ${this.#record(now)}
    `;
  }

  #card(alarm: OpenAlarm, now: number) {
    const { plant, time, feed } = this;
    const name = plant.streams.find(({ id }) => id === alarm.stream)?.name ?? alarm.stream;
    const window = centredOn({ kind: "live", spanMs: 3_600_000 }, alarm.since, now);
    return html`<section class="card">
      <h2 class="of">${name} <small class="quiet">${alarm.stream}</small></h2>
      <mill-alarm-card .alarm=${alarm} .now=${now} .time=${time} .linkUp=${feed.linkUp} full></mill-alarm-card>
      <p>
        <a href=${href({ view: "watch", window, stream: alarm.stream })}>On Watch</a> ·
        <a href=${href({ view: "reading", stream: alarm.stream, at: alarm.raisedAt })}>Reading when it was raised</a>
      </p>
    </section>`;
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
      <h2>What happened lately</h2>
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

customElements.define("mill-alarms-view", AlarmsView);
