import { css, html, LitElement, nothing } from "lit";
import { repeat } from "lit/directives/repeat.js";
import type { Plant, PlantStream, Shift } from "../../core/messages/index.ts";
import { href, type Route } from "../app/route.ts";
import type { ChartGesture } from "../charts/lane-chart.ts";
import { api } from "../data/api.ts";
import type { Feed } from "../data/feed.ts";
import { groupsOf, type LanePlaces, placesOf } from "../data/lane-order.ts";
import { Listening, ticking } from "../data/listening.ts";
import { Loaded } from "../data/loaded.ts";
import { ownSettings } from "../data/own-settings.ts";
import {
  between,
  edges,
  pan,
  span,
  spanning,
  stopAt,
  stretchAbout,
  type TimeWindow,
  zoom,
} from "../data/time-window.ts";
import { baseStyle } from "../parts/base-style.ts";
import type { RangeWish } from "../parts/range-bar.ts";
import "../parts/lane-arranger.ts";
import "../parts/range-bar.ts";
import "./watch-lane.ts";
import type { PlantTime } from "../words/plant-time.ts";

/** excursions that are marked on the time axis, at most */
const mostMarks = 500;
/** lanes that one screen holds under one another */
const sideBySide = 6;

/** All streams over one stretch of time, with one cursor. It owns the window; the URL follows it. */
export class WatchView extends LitElement {
  static override properties = {
    plant: { attribute: false },
    feed: { attribute: false },
    time: { attribute: false },
    route: { attribute: false },
    cursor: { state: true },
    arranging: { state: true },
  };
  declare plant: Plant;
  declare feed: Feed;
  declare time: PlantTime;
  declare route: Extract<Route, { view: "watch" }>;
  declare cursor: number | undefined;
  declare arranging: boolean;

  readonly #excursions = new Loaded(this, (key, signal) => {
    const [from, to] = key.split(" ").map(Number);
    return api.excursions({ from, to, limit: mostMarks }, signal);
  });
  /** known by its beginning: asked for anew when it has ended */
  readonly #shift = new Loaded(this, (_, signal) => api.shifts(signal));
  #cursorOfEvents = 0;

  constructor() {
    super();
    this.arranging = false;
    ticking(this);
    new Listening(this, (changed) => ownSettings.watch(changed));
    new Listening(this, (changed) =>
      this.feed?.watch(() => {
        this.#heardEvents();
        changed();
      }),
    );
  }

  static override styles = [
    baseStyle,
    css`
      :host {
        display: flex;
        flex-direction: column;
        flex: 1;
      }
      .lanes {
        flex: 1;
        display: grid;
        gap: 8px;
        grid-auto-rows: auto;
      }
      /* Few lanes share one axis of time from top to bottom; many stand side by side where a wall has room for them. */
      .lanes.many {
        grid-template-columns: repeat(auto-fill, minmax(min(100%, 1180px), 1fr));
      }
      .lanes .group {
        grid-column: 1 / -1;
      }
      .one {
        margin-bottom: 8px;
      }
      h2.group {
        margin: 4px 0 -2px;
      }
      .under {
        display: flex;
        flex-wrap: wrap;
        justify-content: space-between;
        align-items: center;
        gap: 4px 24px;
        margin-top: 8px;
      }
      .keys {
        font-size: 13px;
        color: var(--quiet);
      }
      @media print {
        .under {
          display: none;
        }
      }
    `,
  ];

  override render() {
    const { plant, feed, time, route } = this;
    const now = feed.now();
    this.#wantExcursions(now);
    const streams = route.stream ? plant.streams.filter(({ id }) => id === route.stream) : plant.streams;
    const received = plant.streams.map(({ id }) => feed.of(id)?.receivedAt ?? 0);
    const lastReadingAt = Math.max(0, ...received) || undefined;
    return html`
      <h1 class="unseen">Watch</h1>
      <mill-range-bar
        .window=${route.window}
        .now=${now}
        .time=${time}
        .linkUp=${feed.linkUp || !feed.everUp}
        .lastReadingAt=${lastReadingAt}
        .shift=${this.#shiftNow(now)}
        @range-wish=${({ detail }: CustomEvent<RangeWish>) => this.#grant(detail)}
      ></mill-range-bar>
      ${
        route.stream
          ? html`<p class="one quiet">
            Only ${route.stream}. <a href=${href({ view: "watch", window: route.window })}>Show all streams</a>
          </p>`
          : nothing
      }
      ${streams.length === 0 ? this.#empty() : nothing}
      ${this.arranging ? this.#arranger() : nothing}
      <div class="lanes ${streams.length > sideBySide ? "many" : ""}" @chart-gesture=${({ detail }: CustomEvent<ChartGesture>) => this.#pointAt(detail)}>
        ${repeat(
          groupsOf(
            placesOf(
              streams.map(({ id }) => id),
              ownSettings.value.lanes,
            ),
          ),
          ({ name }) => name,
          (group) => html`
            ${group.name ? html`<h2 class="group">${group.name}</h2>` : nothing}
            ${repeat(
              group.streams,
              (id) => id,
              (id) => this.#lane(streams.find((each) => each.id === id) as PlantStream, now),
            )}
          `,
        )}
      </div>
      <div class="under"><p class="keys">
        Drag a trend to move through time, turn the wheel to see more or less of it, click to open a reading. With the keyboard: arrows
        move the cursor, Page Up and Page Down pan, + and − zoom, Enter opens the reading.
      </p>
      ${streams.length > 1 && !this.arranging ? html`<button @click=${this.#arrange}>Arrange the lanes</button>` : nothing}</div>
    `;
  }

  #shiftNow(now: number): Shift | undefined {
    const known = this.#shift.value?.current;
    this.#shift.want(known && now >= known.to ? `after ${known.to}` : known ? `of ${known.from}` : "first");
    return known && now < known.to ? known : undefined;
  }

  #lane(stream: PlantStream, now: number) {
    const { feed, time, route } = this;
    return html`<mill-watch-lane
      .stream=${stream}
      .feed=${feed}
      .time=${time}
      .window=${route.window}
      .now=${now}
      .cursor=${this.cursor}
      .excursions=${this.#excursions.value?.excursions ?? []}
      .chosen=${ownSettings.value.properties[stream.id]}
      @chart-gesture=${(event: CustomEvent<ChartGesture>) => this.#answer(event.detail, stream.id)}
      @choose-property=${({ detail }: CustomEvent<string>) => this.#drawFirst(stream, detail)}
      @draw-too=${({ detail }: CustomEvent<string>) => this.#drawToo(stream, detail)}
    ></mill-watch-lane>`;
  }

  #arranger() {
    const { streams } = this.plant;
    const ids = streams.map(({ id }) => id);
    return html`<mill-lane-arranger
      .places=${placesOf(ids, ownSettings.value.lanes)}
      .streams=${streams}
      @lanes-arranged=${({ detail }: CustomEvent<LanePlaces>) => ownSettings.change({ lanes: placesOf(ids, detail) })}
      @arranging-done=${() => {
        this.arranging = false;
      }}
    ></mill-lane-arranger>`;
  }

  #arrange(): void {
    this.arranging = true;
    scrollTo(0, 0);
  }

  #wantExcursions(now: number): void {
    const { from, to } = stretchAbout(edges(this.route.window, now));
    this.#excursions.want(`${from} ${to}`);
  }

  /** One that has ended leaves the stream's open ones: its end is asked for. */
  #heardEvents(): void {
    const newest = this.feed.events.at(-1)?.cursor ?? 0;
    if (newest === this.#cursorOfEvents) return;
    this.#cursorOfEvents = newest;
    this.#excursions.refresh();
  }

  #empty() {
    return this.route.stream
      ? html`<p class="card">There is no stream ${this.route.stream} in this plant. <a href="/watch">Show all streams</a></p>`
      : html`<p class="card">
          No streams yet. Each stream of the plant's configuration gets a lane here: add one with its model and limit set, and
          start the service again.
        </p>`;
  }

  #pointAt(gesture: ChartGesture): void {
    if (gesture.kind === "point") this.cursor = gesture.at;
  }

  #answer(gesture: ChartGesture, stream: string): void {
    const now = this.feed.now();
    switch (gesture.kind) {
      case "pan":
        this.#show(pan(this.route.window, gesture.share, now));
        return;
      case "zoom":
        this.#show(zoom(this.route.window, gesture.factor, gesture.about, now));
        return;
      case "open":
        this.#go({ view: "reading", stream, at: gesture.at });
        return;
      case "point":
        return; // all lanes share the cursor: answered once, for all of them
    }
  }

  #grant(wish: RangeWish): void {
    const now = this.feed.now();
    const { window } = this.route;
    const middle = () => {
      const { from, to } = edges(window, now);
      return (from + to) / 2;
    };
    switch (wish.kind) {
      case "span":
        this.#show(spanning(window, wish.spanMs, now));
        return;
      case "pan":
        this.#show(pan(window, wish.share, now));
        return;
      case "zoom":
        this.#show(zoom(window, wish.factor, middle(), now));
        return;
      case "stop":
        this.#show(stopAt(window, now));
        return;
      case "live":
        this.#show({ kind: "live", spanMs: span(window, now) });
        return;
      case "since":
        this.#show({ kind: "since", from: wish.from });
        return;
      case "between":
        this.#show(between(wish.from, wish.to, now));
        return;
    }
  }

  #show(window: TimeWindow): void {
    this.#go({ ...this.route, window }, true);
  }

  #go(route: Route, replace = false): void {
    this.dispatchEvent(new CustomEvent("go", { detail: { route, replace }, bubbles: true, composed: true }));
  }

  /** Names of the properties that a lane draws: as kept, else the first that the model gives. */
  #drawnOf({ id, properties }: PlantStream): string[] {
    return ownSettings.value.properties[id] ?? properties.slice(0, 1).map(({ name }) => name);
  }

  /** The property takes the first place; the others that are drawn stay, but for the one it takes it from. */
  #drawFirst(stream: PlantStream, name: string): void {
    const [, ...others] = this.#drawnOf(stream);
    this.#keepDrawn(stream, [name, ...others.filter((each) => each !== name)]);
  }

  #drawToo(stream: PlantStream, name: string): void {
    const drawn = this.#drawnOf(stream);
    this.#keepDrawn(stream, drawn.includes(name) ? drawn.filter((each) => each !== name) : [...drawn, name]);
  }

  #keepDrawn({ id }: PlantStream, drawn: string[]): void {
    ownSettings.change({ properties: { ...ownSettings.value.properties, [id]: drawn } });
  }
}

customElements.define("mill-watch-view", WatchView);
