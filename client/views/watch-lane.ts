import { css, html, LitElement, nothing } from "lit";
import { repeat } from "lit/directives/repeat.js";
import type { Excursion, PlantProperty, PlantStream } from "../../core/messages/index.ts";
import type { LanePicture } from "../charts/lane-drawing.ts";
import { byUrgency, isGone } from "../data/alarm-order.ts";
import type { Feed } from "../data/feed.ts";
import { freshness } from "../data/freshness.ts";
import { LabLoader } from "../data/lab-loader.ts";
import { Listening } from "../data/listening.ts";
import { edges, isLive, type TimeWindow } from "../data/time-window.ts";
import { entryAt, type HeldTrend } from "../data/trend-columns.ts";
import { TrendLoader } from "../data/trend-loader.ts";
import { type TrendSight, trendRow, trendSentence } from "../data/trend-words.ts";
import { baseStyle } from "../parts/base-style.ts";
import "../charts/lane-chart.ts";
import "../parts/alarm-card.ts";
import "../parts/lane-number.ts";
import "../parts/trend-table.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted, named, withUnit } from "../words/quantity.ts";

/** Lanes that come into sight when the page is scrolled by this much are kept ready. */
const nearPx = 300;
const farEveryMs = 1000;
/** open alarms of a lane that stand with evidence and response; the others fold them, so that a lane stays a lane */
const wholeCards = 2;

/** One stream: the number, the trend with its ribbon, and what is open at its end. */
export class WatchLane extends LitElement {
  static override properties = {
    stream: { attribute: false },
    feed: { attribute: false },
    time: { attribute: false },
    window: { attribute: false },
    now: { attribute: false },
    cursor: { attribute: false },
    excursions: { attribute: false },
    chosen: { attribute: false },
    tabled: { state: true },
  };
  declare stream: PlantStream;
  declare feed: Feed;
  declare time: PlantTime;
  declare window: TimeWindow;
  /** the server's clock at this drawing: all lanes of a screen share it */
  declare now: number;
  declare cursor: number | undefined;
  /** of all streams, in and about the window */
  declare excursions: readonly Excursion[];
  /** names of the properties that are drawn; the first stands big */
  declare chosen: readonly string[] | undefined;
  declare tabled: boolean;
  readonly #trend = new TrendLoader(
    this,
    () => this.feed,
    () => this.stream,
  );
  readonly #lab = new LabLoader(this);
  /** by property */
  readonly #sentences = new Map<string, { made: number; text: string }>();
  #near = true;
  #renderedAt = 0;
  #stopWatching: (() => void) | undefined;

  constructor() {
    super();
    this.tabled = false;
    new Listening(this, (changed) => this.feed?.watchStream(this.stream.id, changed));
  }

  static override styles = [
    baseStyle,
    css`
      :host {
        display: grid;
        grid-template-columns: 256px minmax(0, 1fr) 292px;
        background: var(--lane);
        border: 1px solid var(--rule);
        border-radius: 6px;
        min-height: 216px;
      }
      .now {
        padding: 8px 14px;
        border-right: 1px solid var(--rule);
      }
      .whole-lane {
        grid-column: 1 / -1;
        border-right: 0;
      }
      .open {
        padding: 10px 14px;
        border-left: 1px solid var(--rule);
        display: grid;
        gap: 10px;
        align-content: start;
      }
      .chart {
        display: grid;
        grid-template-rows: minmax(0, 1fr) auto;
        padding: 2px 0 0 0;
        min-width: 0;
        min-height: calc(100px + var(--trends) * 114px);
      }
      .stack {
        display: flex;
        flex-direction: column;
        min-width: 0;
        grid-row: 1;
        grid-column: 1;
      }
      .stack mill-lane-chart {
        height: auto;
        flex: 2;
      }
      .stack mill-lane-chart[upper] {
        flex: 1;
      }
      .caption {
        display: flex;
        gap: 12px;
        justify-content: space-between;
        align-items: center;
        padding: 0 8px 0 52px;
        min-height: 24px;
        font-size: 13px;
        color: var(--quiet);
      }
      .caption .at {
        color: var(--ink);
        overflow: hidden;
        text-overflow: ellipsis;
        white-space: nowrap;
      }
      .caption button {
        min-height: 24px;
        padding: 0 8px;
        font-size: 13px;
        color: var(--quiet);
        border-color: transparent;
      }
      .caption button:hover,
      .caption button[aria-expanded="true"] {
        border-color: var(--edge);
      }
      .wait {
        place-self: center;
        color: var(--quiet);
        max-width: 48ch;
        text-align: center;
        padding: 16px;
        grid-row: 1;
        grid-column: 1;
        z-index: 1;
      }
      @media (max-width: 1100px) {
        :host {
          grid-template-columns: 248px minmax(0, 1fr);
        }
        .open {
          grid-column: 1 / -1;
          border-left: 0;
          border-top: 1px solid var(--rule);
        }
      }
      @media (max-width: 700px) {
        :host {
          grid-template-columns: minmax(0, 1fr);
        }
        .now {
          border-right: 0;
          border-bottom: 1px solid var(--rule);
        }
        .chart {
          height: calc(150px + var(--trends) * 130px);
        }
        .chart:has(mill-trend-table) {
          height: auto;
        }
        .caption {
          padding-left: 12px;
        }
      }
      @media print {
        :host {
          break-inside: avoid;
        }
      }
    `,
  ];

  override connectedCallback(): void {
    super.connectedCallback();
    const seen = new IntersectionObserver(
      ([entry]) => {
        this.#near = entry.isIntersecting;
        if (this.#near) this.requestUpdate();
      },
      { rootMargin: `${nearPx}px` },
    );
    seen.observe(this);
    this.#stopWatching = () => seen.disconnect();
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback();
    this.#stopWatching?.();
  }

  /** A lane far off the screen follows once a second, not every move of the pointer. */
  override shouldUpdate(): boolean {
    return this.#near || !this.hasUpdated || performance.now() - this.#renderedAt > farEveryMs;
  }

  override render() {
    this.#renderedAt = performance.now();
    const { stream, feed, now, time } = this;
    const state = feed.of(stream.id);
    const drawn = this.#drawn();
    const [property] = drawn;
    if (!property)
      return html`<div class="now whole-lane">
        <h2>${stream.name} <small class="quiet">${stream.id}</small></h2>
        <p>${stream.trouble ?? "No model gives this stream a property yet."}</p>
      </div>`;
    const fresh = freshness({
      now,
      linkUp: feed.linkUp,
      heardAt: feed.heardAt,
      engine: feed.engine,
      readingAt: state?.latest?.time ?? null,
      receivedAt: state?.receivedAt ?? null,
      periodMs: stream.periodMs,
    });
    return html`
      <div class="now">
        <mill-lane-number
          .stream=${stream}
          .state=${state}
          .chosen=${property}
          .drawn=${drawn.map(({ name }) => name)}
          .freshness=${fresh}
          .now=${now}
          .time=${time}
        ></mill-lane-number>
      </div>
      ${this.#charts(drawn, fresh.kind === "old")}
      <div class="open">${this.#open()}</div>
    `;
  }

  /** The properties whose trends are drawn: as chosen, else the first. */
  #drawn(): PlantProperty[] {
    const { properties } = this.stream;
    const chosen = (this.chosen ?? []).flatMap((name) => properties.find((each) => each.name === name) ?? []);
    return chosen.length > 0 ? chosen : properties.slice(0, 1);
  }

  #charts(drawn: readonly PlantProperty[], old: boolean) {
    const { from, to } = edges(this.window, this.now);
    const width = this.clientWidth > 1100 ? this.clientWidth - 640 : Math.max(240, this.clientWidth - 360);
    if (this.#near) this.#lab.want(this.stream.id, { from, to }, this.feed);
    if (this.#near) this.#trend.want({ from, to, points: Math.round(Math.min(1200, width)) });
    const { trend, error, loading } = this.#trend;
    const empty = trend && !trend.time.some((at) => at >= from && at <= to);
    return html`<div class="chart" style="--trends:${drawn.length}">
      <div class="stack">${drawn.map((property, i) => this.#chart(property, { first: i === 0, foot: i === drawn.length - 1, old }))}</div>
      ${error ? html`<p class="wait" role="status">The trend could not be read. ${error.message}</p>` : nothing}
      ${!trend && loading && !error ? html`<p class="wait">Reading the trend …</p>` : nothing}
      ${empty && !error ? html`<p class="wait">No readings in this stretch.</p>` : nothing}
      ${
        this.tabled && trend
          ? html`<mill-trend-table
              .stream=${this.stream}
              .sights=${drawn.map((property) => this.#sight(trend, property, from, to))}
              .lab=${drawn.flatMap(({ name }) => this.#lab.of(name, { from, to }))}
            ></mill-trend-table>`
          : nothing
      }
    </div>`;
  }

  #chart(property: PlantProperty, { first, foot, old }: { first: boolean; foot: boolean; old: boolean }) {
    const { from, to } = edges(this.window, this.now);
    const { trend, version } = this.#trend;
    const picture: LanePicture = {
      trend,
      property,
      periodMs: this.stream.periodMs,
      gapMs: this.stream.gapMs,
      from,
      to,
      live: isLive(this.window),
      foot,
      old,
      marks: first ? this.#marks() : [],
      lab: this.#lab.of(property.name, { from, to }).map(({ time, value, pair }) => ({
        at: time,
        value,
        counts: pair.apart === null,
      })),
    };
    return html`<div class="caption">
        <span class="at">${this.#caption(property, first)}</span>
        ${
          first
            ? html`<button
                aria-expanded=${this.tabled}
                aria-label="Table of ${this.stream.name}"
                @click=${() => {
                  this.tabled = !this.tabled;
                }}
              >
                Table
              </button>`
            : nothing
        }
      </div>
      <mill-lane-chart
        ?upper=${!foot}
        .picture=${picture}
        .version=${version}
        .cursor=${this.cursor}
        .time=${this.time}
        .label=${trend ? this.#label(property, from, to) : `${this.stream.name}: the trend is loading`}
      ></mill-lane-chart>`;
  }

  #marks(): LanePicture["marks"] {
    const { id } = this.stream;
    const open = this.feed.of(id)?.excursions ?? [];
    const past = this.excursions.filter((each) => each.stream === id && !open.some((other) => other.id === each.id));
    return [...past, ...open].map(({ kind, start, end }) => ({ kind, from: start, to: end ?? this.now }));
  }

  /** At rest what the axis shows; with the cursor on, the values at it. */
  #caption(property: PlantProperty, withTrust: boolean) {
    const { trend } = this.#trend;
    const title = `${named(property.name)}, ${property.unit}`;
    if (this.cursor === undefined || !trend) return title;
    const index = entryAt(trend, this.cursor, this.stream.gapMs);
    const at = this.time.exact(this.cursor, this.now);
    if (index === undefined) return withTrust ? html`<b>${at}</b> no reading` : title;
    const row = trendRow(trend, property, index);
    const lab = this.#labAt(property, this.cursor);
    if (!withTrust) return html`${named(property.name)} ${row.value}${lab}`;
    return html`<b>${this.time.exact(row.at, this.now)}</b> ${row.value}${lab} · ${row.verdict} · T² ${row.t2} · Q ${row.q} × limit`;
  }

  /** The laboratory's result under the cursor, in words; none within reach says nothing. */
  #labAt(property: PlantProperty, at: number): string {
    const { from, to } = edges(this.window, this.now);
    const reach = (to - from) / 150;
    const near = this.#lab.of(property.name, { from: at - reach, to: at + reach });
    return near
      .map(({ value, unit, pair }) => ` · lab ${withUnit(String(value), unit)}${pair.apart ? ` (${pair.apart})` : ""}`)
      .join("");
  }

  /** Made anew every few seconds only: it is read, not watched. */
  #label(property: PlantProperty, from: number, to: number): string {
    const { trend } = this.#trend;
    const at = performance.now();
    const before = this.#sentences.get(property.name);
    if (!trend || (before && at - before.made <= 5000)) return before?.text ?? "";
    const text = `${this.stream.name}. ${trendSentence(this.#sight(trend, property, from, to))} Arrow keys move the cursor, Page Up and Page Down pan, plus and minus zoom, Enter opens the reading.`;
    this.#sentences.set(property.name, { made: at, text });
    return text;
  }

  #sight(trend: HeldTrend, property: PlantProperty, from: number, to: number): TrendSight {
    const { now, time, window, stream } = this;
    return { trend, property, from, to, now, time, gapMs: stream.gapMs, live: isLive(window) };
  }

  #open() {
    const { feed, stream, now, time } = this;
    const state = feed.of(stream.id);
    const alarms = byUrgency(state?.alarms ?? []).filter(({ priority }) => priority !== "record only");
    const aside = state?.setAside ?? [];
    const refused = state?.refused ?? 0;
    const trouble = state?.trouble ?? stream.trouble;
    return html`
      ${
        !feed.linkUp && feed.heardAt !== null
          ? html`<p><b>As last heard at <span class="whole">${time.exact(feed.heardAt, now)}:</span></b></p>`
          : nothing
      }
      ${alarms.length === 0 ? html`<p class="quiet">No open alarms.</p>` : nothing}
      ${repeat(
        alarms,
        ({ key }) => key,
        (alarm, i) =>
          html`<mill-alarm-card
            .alarm=${alarm}
            .now=${now}
            .time=${time}
            .linkUp=${feed.linkUp}
            ?brief=${isGone(alarm) || i >= wholeCards}
          ></mill-alarm-card>`,
      )}
      ${
        aside.length > 0
          ? html`<p class="quiet"><a href="/alarms">${counted(aside.length, "alarm")} set aside</a>: ${aside.map(({ title, state }) => `${title} (${state})`).join(", ")}</p>`
          : nothing
      }
      ${
        state?.process && state.process.state !== "running"
          ? html`<p>
              The line is <b>${state.process.state}</b> since
              <span class="whole">${time.brief(state.process.since, now)}</span>.
            </p>`
          : nothing
      }
      ${state?.held ? html`<p class="quiet">Property alarms are held while the reading is not inside.</p>` : nothing}
      ${trouble ? html`<p><b>Not scored.</b> ${trouble}</p>` : nothing}
      ${refused > 0 ? html`<p class="quiet"><a href="/plant">${counted(refused, "message")} refused</a></p>` : nothing}
    `;
  }
}
customElements.define("mill-watch-lane", WatchLane);
