import { css, html, LitElement } from "lit";
import { repeat } from "lit/directives/repeat.js";
import { html as staticHtml } from "lit/static-html.js";
import type { Plant } from "../../core/messages/index.ts";
import { isWaiting } from "../data/alarm-order.ts";
import { ApiError, api } from "../data/api.ts";
import { Feed } from "../data/feed.ts";
import { ownSettings } from "../data/own-settings.ts";
import { baseStyle } from "../parts/base-style.ts";
import { type PlantTime, plantTime } from "../words/plant-time.ts";
import { type Notice, notices } from "./notices.ts";
import { href, parseRoute, type Route } from "./route.ts";
import { ViewLoader } from "./view-loader.ts";
import { views } from "./views.ts";
import "./top-bar.ts";
import "../views/sign-in-view.ts";

const retryMs = 2000;
/** A window that is dragged changes many times a second; browsers refuse more than about a hundred URL changes in half a minute. */
const urlSettleMs = 400;

/** The frame of every view: who and where, what is open, is it live; and which view the URL asks for. */
export class MillraceApp extends LitElement {
  static override properties = {
    plant: { state: true },
    trouble: { state: true },
    route: { state: true },
  };
  declare plant: Plant | undefined;
  declare trouble: Error | undefined;
  declare route: Route;
  #feed: Feed | undefined;
  #time: PlantTime | undefined;
  #timer: ReturnType<typeof setInterval> | undefined;
  #settle: ReturnType<typeof setTimeout> | undefined;
  #said = new Map<string, string>();
  #wasUp = false;
  /** cursor of the newest change of limits that the drawn limits know of */
  #limitsKnown = 0;
  readonly #loader = new ViewLoader(this);
  readonly #stop = new AbortController();

  constructor() {
    super();
    this.route = parseRoute(location.pathname, location.search);
  }

  static override styles = [
    baseStyle,
    css`
      :host {
        min-height: 100vh;
        display: flex;
        flex-direction: column;
      }
      .skip {
        position: absolute;
        left: -100vw;
      }
      .skip:focus {
        left: 8px;
        top: 8px;
        z-index: 3;
        background: var(--lane);
        padding: 6px 12px;
      }
      main {
        flex: 1;
        display: flex;
        flex-direction: column;
        padding: 0 16px 8px;
        min-width: 0;
      }
      main:focus {
        outline: none;
      }
      .notices {
        position: sticky;
        top: 0;
        z-index: 2;
      }
      .trouble {
        background: var(--ink);
        color: var(--lane);
        padding: 8px 16px;
        font-size: 16px;
        font-weight: 700;
        border-bottom: 1px solid var(--lane);
      }
      .news {
        padding: 6px 16px;
        border-bottom: 1px solid var(--rule);
        background: var(--tone);
      }
      footer {
        padding: 4px 16px;
        border-top: 1px solid var(--rule);
        font-size: 13px;
        color: var(--quiet);
        display: flex;
        flex-wrap: wrap;
        gap: 4px 24px;
        position: sticky;
        bottom: 0;
        background: var(--page);
        z-index: 1;
      }
      footer b {
        color: var(--ink);
        font-weight: 700;
      }
      .start {
        margin: 15vh auto;
        max-width: 60ch;
        padding: 0 16px;
        display: grid;
        gap: 8px;
      }
      /* On paper whose plant, when, the caution and whatever is wrong with the link stay with the numbers. */
      @media print {
        :host {
          display: block;
        }
        main {
          display: block;
          padding: 0;
        }
        footer,
        .notices {
          position: static;
        }
        .skip {
          display: none;
        }
        /* the record of a shift is a document with a head of its own */
        :host([view="handover"]) :is(mill-top-bar, footer, .notices, .news) {
          display: none;
        }
      }
      @media (max-width: 700px) {
        main {
          padding: 0 8px 8px;
        }
        footer {
          position: static;
        }
      }
    `,
  ];

  override connectedCallback(): void {
    super.connectedCallback();
    const { signal } = this.#stop;
    addEventListener(
      "popstate",
      () => {
        this.route = parseRoute(location.pathname, location.search);
      },
      { signal },
    );
    this.addEventListener("go", (event) => {
      const { route, replace } = (event as CustomEvent<{ route: Route; replace: boolean }>).detail;
      this.#go(route, replace);
    });
    this.addEventListener("click", (event) => this.#followLink(event));
    this.#timer = setInterval(() => this.requestUpdate(), 500);
    void this.#begin();
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback();
    this.#stop.abort();
    clearInterval(this.#timer);
    this.#feed?.close();
  }

  async #begin(): Promise<void> {
    try {
      const plant = await api.plant();
      this.#time = plantTime(plant.timeZone);
      const socket = new URL("/live", location.href);
      socket.protocol = socket.protocol === "https:" ? "wss:" : "ws:";
      this.#feed = new Feed(
        socket.href,
        plant.streams.map(({ id }) => id),
      );
      this.#feed.clockOffsetMs = plant.serverTime - Date.now();
      this.#feed.watch(() => this.#heard());
      this.#feed.open();
      void ownSettings.of(plant.person);
      this.plant = plant;
      this.trouble = undefined;
    } catch (error) {
      this.trouble = error as Error;
      // Where somebody must sign in first, asking again by itself would not help.
      if (!needsSignIn(error)) setTimeout(() => void this.#begin(), retryMs);
    }
  }

  /** The link went: was it the session? Then nothing of the plant stays on the screen. */
  async #stayOnlyIfWelcome(): Promise<void> {
    if (!(await api.isWelcome())) location.reload();
  }

  /** New limits, or a link that is back (the service may be another one: other limits, another model, other streams): the plant is read again. */
  #heard(): void {
    const up = this.#feed?.linkUp ?? false;
    const changed = this.#feed?.events.findLast(({ kind }) => kind === "limits in force")?.cursor ?? 0;
    if (changed > this.#limitsKnown && this.plant && this.#wasUp) void this.#readPlantAgain(this.plant);
    this.#limitsKnown = Math.max(this.#limitsKnown, changed);
    if (up && !this.#wasUp && this.plant) void this.#readPlantAgain(this.plant);
    if (!up && this.#wasUp) void this.#stayOnlyIfWelcome();
    this.#wasUp = up;
    this.requestUpdate();
  }

  async #readPlantAgain(before: Plant): Promise<void> {
    try {
      const plant = await api.plant();
      const ids = ({ streams }: Plant) => streams.map(({ id }) => id).join(" ");
      if (ids(plant) !== ids(before) || plant.version !== before.version) location.reload();
      else this.plant = plant;
    } catch {
      // The link has just come back and may go again: the plant is read at the next return.
    }
  }

  override render() {
    const { plant } = this;
    const feed = this.#feed;
    const time = this.#time;
    if (!plant || !feed || !time) return this.#start();
    const now = feed.now();
    const told = notices({
      now,
      linkUp: feed.linkUp,
      everUp: feed.everUp,
      heardAt: feed.heardAt,
      clockOffsetMs: feed.clockOffsetMs,
      engine: feed.engine,
      refused: feed.refused,
    });
    const waiting = feed.alarms().filter((alarm) => isWaiting(alarm) && alarm.priority !== "record only");
    this.setAttribute("view", this.route.view);
    document.title = `${waiting.length ? `(${waiting.length}) ` : ""}${nameOf(this.route)} · ${plant.name}`;
    return html`
      <nav aria-label="Skip"><a class="skip" href="#main" @click=${this.#skip}>Skip to the view</a></nav>
      <mill-top-bar .plant=${plant} .route=${this.route} .alarms=${feed.alarms()} .now=${now} .time=${time} .linkUp=${feed.linkUp}></mill-top-bar>
      <div class="unseen" role="alert">${this.#spoken(told, feed)}</div>
      <section class="notices" aria-label="Trouble of the service">
        ${told.filter(({ weight }) => weight === "trouble").map(({ says }) => html`<p class="trouble">${says}</p>`)}
      </section>
      <section aria-label="News of the service">
        ${told.filter(({ weight }) => weight === "news").map(({ says }) => html`<p class="news">${says}</p>`)}
      </section>
      <main id="main" tabindex="-1">${this.#view(plant, feed, time)}</main>
      <footer>
        <span><b>Caution:</b> ${plant.caution}</span>
      </footer>
    `;
  }

  /**
   * What a screen reader is told without being asked: new troubles of the service, and alarms that wait for a person. In the words with which
   * each began, so that a count that runs on is not read out every second.
   */
  #spoken(told: readonly Notice[], feed: Feed) {
    const now = new Map<string, string>();
    for (const { key, says } of told) now.set(key, this.#said.get(key) ?? says);
    for (const { stream, key, priority, title, state, response, raisedAt } of feed.alarms()) {
      if (state !== "unacknowledged" || priority === "record only") continue;
      const name = this.plant?.streams.find(({ id }) => id === stream)?.name ?? stream;
      now.set(`${stream} ${key} ${raisedAt}`, `${priority} alarm: ${name}: ${title}. ${response}`);
    }
    this.#said = now;
    return repeat(
      now,
      ([key]) => key,
      ([, says]) => html`<p>${says}</p>`,
    );
  }

  #start() {
    return html`<main class="start">
      <h1>Millrace</h1>
      ${
        needsSignIn(this.trouble)
          ? html`<mill-sign-in @signed-in=${() => void this.#begin()}></mill-sign-in>`
          : this.trouble
            ? html`<p role="alert">The plant could not be read. ${this.trouble.message}</p>
            <p class="quiet">Until it answers no number is shown here. Watch the process by other means.</p>`
            : html`<p role="status">Reading the plant …</p>`
      }
    </main>`;
  }

  #view(plant: Plant, feed: Feed, time: PlantTime) {
    const { route } = this;
    const { word, tag } = views[route.view];
    const state = this.#loader.want(route.view);
    if (state === "ready")
      return staticHtml`<${tag} .plant=${plant} .feed=${feed} .time=${time} .route=${route}></${tag}>`;
    if (state === "loading") return html`<p class="start" role="status">Fetching ${word} …</p>`;
    return html`<div class="start" role="alert">
      <p>${word} could not be fetched: the server does not answer, or was updated since this page was loaded.</p>
      <button @click=${() => location.reload()}>Load the page again</button>
    </div>`;
  }

  #go(route: Route, replace: boolean): void {
    const before = this.route.view;
    this.route = route;
    clearTimeout(this.#settle);
    if (replace) this.#settle = setTimeout(() => history.replaceState(null, "", href(route)), urlSettleMs);
    else history.pushState(null, "", href(route));
    if (before !== route.view) scrollTo(0, 0);
  }

  /** Links within the product change the view without loading the page again. */
  #followLink(event: MouseEvent): void {
    if (event.defaultPrevented || event.button !== 0 || event.ctrlKey || event.metaKey || event.shiftKey) return;
    const link = event.composedPath().find((each) => each instanceof HTMLAnchorElement);
    if (!link || link.origin !== location.origin || link.target || link.getAttribute("href")?.startsWith("#")) return;
    event.preventDefault();
    this.#go(parseRoute(link.pathname, link.search), false);
  }

  #skip(event: Event): void {
    event.preventDefault();
    (this.renderRoot.querySelector("#main") as HTMLElement).focus();
  }
}

function needsSignIn(error: unknown): boolean {
  return error instanceof ApiError && error.status === 401;
}

function nameOf(route: Route): string {
  const { word } = views[route.view];
  return "stream" in route && route.stream ? `${word} ${route.stream}` : word;
}

customElements.define("mill-app", MillraceApp);
