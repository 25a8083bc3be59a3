import { css, html, LitElement, nothing } from "lit";
import type { Plant, PlantStream, Refusals } from "../../core/messages/index.ts";
import { href } from "../app/route.ts";
import { api } from "../data/api.ts";
import type { Feed } from "../data/feed.ts";
import { freshness } from "../data/freshness.ts";
import { Listening, ticking } from "../data/listening.ts";
import { Loaded } from "../data/loaded.ts";
import { baseStyle } from "../parts/base-style.ts";
import { duration, period } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted, grouped, named, percent, thin } from "../words/quantity.ts";

const refreshMs = 5000;

/** Is the service itself healthy, what runs where, and what was refused? */
export class PlantView extends LitElement {
  static override properties = { plant: { attribute: false }, feed: { attribute: false }, time: { attribute: false } };
  declare plant: Plant;
  declare feed: Feed;
  declare time: PlantTime;
  #timer: ReturnType<typeof setInterval> | undefined;
  readonly #refusals = new Loaded<Refusals>(this, (_, signal) => api.refusals(20, signal));
  readonly #events = new Loaded(this, (_, signal) => api.events({ limit: 200 }, signal));

  constructor() {
    super();
    ticking(this);
    new Listening(this, (changed) => this.feed?.watch(changed));
  }

  static override styles = [
    baseStyle,
    css`
      h1 {
        padding: 12px 0;
      }
      .grid {
        display: grid;
        grid-template-columns: minmax(0, 1fr) minmax(0, 1fr);
        gap: 8px;
        align-items: start;
      }
      .wide {
        grid-column: 1 / -1;
      }
      h2 {
        margin-bottom: 8px;
      }
      dl {
        display: grid;
        grid-template-columns: max-content 1fr;
        gap: 4px 16px;
      }
      dt {
        color: var(--quiet);
      }
      .bad {
        font-weight: 700;
      }
      td.words {
        min-width: 28ch;
      }
      code {
        font-family: ui-monospace, monospace;
        font-size: 13px;
      }
      @media (max-width: 900px) {
        .grid {
          grid-template-columns: minmax(0, 1fr);
        }
      }
    `,
  ];

  override connectedCallback(): void {
    super.connectedCallback();
    this.#timer = setInterval(() => {
      this.#refusals.refresh();
      this.#events.refresh();
    }, refreshMs);
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback();
    clearInterval(this.#timer);
  }

  override render() {
    this.#refusals.want("refusals");
    this.#events.want("events");
    const now = this.feed.now();
    return html`
      <h1>Plant</h1>
      <div class="grid">
        ${this.#streams(now)} ${this.#service(now)} ${this.#totals()} ${this.#latest(now)} ${this.#record(now)}
      </div>
    `;
  }

  #streams(now: number) {
    const { plant, feed } = this;
    return html`<section class="card wide">
      <h2>Streams</h2>
      ${
        plant.streams.length === 0
          ? html`<p class="quiet">No streams are configured yet. Add one to the plant's configuration and start the service again.</p>`
          : html`<div class="scrolls" tabindex="0" role="region" aria-label="Streams">
            <table>
              <thead>
                <tr>
                  <th scope="col">Stream</th>
                  <th scope="col">Newest reading</th>
                  <th scope="col">Period</th>
                  <th scope="col">Properties (calibrated range)</th>
                  <th scope="col">Model</th>
                  <th scope="col" class="number">Limit set</th>
                  <th scope="col" class="number">Refused</th>
                </tr>
              </thead>
              <tbody>
                ${plant.streams.map((stream) => this.#stream(stream, now, feed))}
              </tbody>
            </table>
          </div>`
      }
    </section>`;
  }

  #stream(stream: PlantStream, now: number, feed: Feed) {
    const state = feed.of(stream.id);
    const trouble = state?.trouble ?? stream.trouble;
    const refused = (this.#refusals.value?.totals ?? [])
      .filter((total) => total.stream === stream.id)
      .reduce((sum, { count }) => sum + count, 0);
    const fresh = freshness({
      now,
      linkUp: feed.linkUp,
      heardAt: feed.heardAt,
      engine: feed.engine,
      readingAt: state?.latest?.time ?? null,
      receivedAt: state?.receivedAt ?? null,
      periodMs: stream.periodMs,
    });
    return html`<tr>
      <td>${stream.name} <span class="quiet whole">${stream.id}</span></td>
      <td>
        ${
          fresh.kind === "none"
            ? "none yet"
            : fresh.kind === "old"
              ? html`<span class="bad">${this.time.exact(fresh.asOf, now)}, ${duration(fresh.ageMs)} old: ${fresh.says}</span>`
              : html`<a href=${href({ view: "reading", stream: stream.id, at: state?.latest?.time })}
                  >${this.time.exact(state?.latest?.time ?? now, now)}</a
                >, ${state?.latest?.verdict[0]}`
        }
      </td>
      <td class="whole">${period(stream.periodMs)}</td>
      <td>
        ${stream.properties.map(
          ({ name, unit, range }) =>
            html`<div>${named(name)} <span class="quiet whole">${Number(range[0].toPrecision(3))} to ${Number(range[1].toPrecision(3))}${thin}${unit}</span></div>`,
        )}
      </td>
      <td>
        ${trouble ? html`<span class="bad">${trouble}</span>` : nothing}
        ${
          stream.model
            ? html`${stream.model.name} <code class="quiet" title=${stream.model.id}>${stream.model.id.slice(0, 10)}</code>`
            : trouble
              ? nothing
              : "no model"
        }
      </td>
      <td class="number"><a href=${href({ view: "limits", stream: stream.id })}>${stream.limitSet}</a></td>
      <td class="number">${grouped(refused)}</td>
    </tr>`;
  }

  #service(now: number) {
    const { plant, feed, time } = this;
    const { engine } = feed;
    const off = Math.abs(feed.clockOffsetMs);
    return html`<section class="card">
      <h2>Service</h2>
      <dl>
        <dt>Version</dt>
        <dd>${plant.version}</dd>
        <dt>Link</dt>
        <dd class=${feed.linkUp ? "" : "bad"}>
          ${feed.linkUp ? "up" : html`lost${feed.heardAt ? html`, last heard ${time.exact(feed.heardAt, now)}` : nothing}`}
        </dd>
        <dt>Engine</dt>
        <dd class=${engine?.running === false ? "bad" : ""}>
          ${!engine ? "not heard yet" : engine.running ? "runs" : "does not run: nothing is judged"}
        </dd>
        <dt>Broker</dt>
        <dd class=${engine?.source === false ? "bad" : ""}>
          ${!engine ? "not heard yet" : engine.source ? "reached" : "not reached: no readings can arrive"}
        </dd>
        <dt>Waiting</dt>
        <dd>${engine ? `${counted(engine.waiting, "reading")}, the oldest for ${duration(engine.behindMs)}` : "—"}</dd>
        ${
          engine?.loading
            ? html`<dt>History</dt>
              <dd>${engine.loading.stream}: ${percent(engine.loading.share)}, ${counted(engine.loading.done, "reading")}</dd>`
            : nothing
        }
        <dt>Clocks</dt>
        <dd class=${off > 5000 ? "bad" : ""}>
          ${off < 1000 ? "this computer and the server agree within 1 s" : `this computer is ${duration(off)} ${feed.clockOffsetMs > 0 ? "behind" : "ahead"}`}
        </dd>
        <dt>Zone</dt>
        <dd>${plant.timeZone} (${time.zoneName(now)})</dd>
      </dl>
    </section>`;
  }

  #totals() {
    const { value, error } = this.#refusals;
    return html`<section class="card">
      <h2>Refused messages</h2>
      ${error ? html`<p role="status">The refusals could not be read. ${error.message}</p>` : nothing}
      ${
        value && value.totals.length === 0
          ? html`<p class="quiet">None. A message that cannot be used is kept here with its reason; nothing is dropped silently.</p>`
          : nothing
      }
      ${
        value && value.totals.length > 0
          ? html`<table>
            <thead>
              <tr>
                <th scope="col">Stream</th>
                <th scope="col">Reason</th>
                <th scope="col" class="number">Count</th>
              </tr>
            </thead>
            <tbody>
              ${value.totals.map(
                ({ stream, reason, count }) =>
                  html`<tr>
                    <td>${stream || "none of ours"}</td>
                    <td>${reason}</td>
                    <td class="number">${grouped(count)}</td>
                  </tr>`,
              )}
            </tbody>
          </table>`
          : nothing
      }
    </section>`;
  }

  #latest(now: number) {
    const { value } = this.#refusals;
    if (!value || value.latest.length === 0) return nothing;
    return html`<section class="card wide">
      <h2>Refused lately</h2>
      <div class="scrolls" tabindex="0" role="region" aria-label="Refused lately">
        <table>
          <thead>
            <tr>
              <th scope="col">Last, ${this.time.zoneName(now)}</th>
              <th scope="col">Topic</th>
              <th scope="col">Reason</th>
              <th scope="col">In words</th>
              <th scope="col" class="number">Times</th>
            </tr>
          </thead>
          <tbody>
            ${value.latest.map(
              ({ lastAt, topic, reason, says, count }) =>
                html`<tr>
                  <td class="whole" title=${this.time.full(lastAt)}>${this.time.exact(lastAt, now)}</td>
                  <td><code>${topic}</code></td>
                  <td class="whole">${reason}</td>
                  <td class="words">${says}</td>
                  <td class="number">${grouped(count)}</td>
                </tr>`,
            )}
          </tbody>
        </table>
      </div>
    </section>`;
  }

  #record(now: number) {
    const events = (this.#events.value?.events ?? []).filter(
      ({ stream, alarm, excursion }) => stream === null || (!alarm && !excursion),
    );
    return html`<section class="card wide">
      <h2>Service record</h2>
      ${
        events.length === 0
          ? html`<p class="quiet">Nothing of the service itself in the last entries of the record.</p>`
          : html`<ul>
            ${events.map(
              ({ at, kind, stream, says }) =>
                html`<li><span class="whole" title=${this.time.full(at)}>${this.time.exact(at, now)}</span> · ${stream ?? kind}: ${says}</li>`,
            )}
          </ul>`
      }
    </section>`;
  }
}
customElements.define("mill-plant-view", PlantView);
