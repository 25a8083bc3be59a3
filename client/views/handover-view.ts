import { css, html, LitElement, nothing } from "lit";
import type { BoundRecord, HandoverShifts, Plant, Said } from "../../core/messages/index.ts";
import { href, type Route } from "../app/route.ts";
import { api } from "../data/api.ts";
import type { Feed } from "../data/feed.ts";
import { Listening } from "../data/listening.ts";
import { Loaded } from "../data/loaded.ts";
import { baseStyle } from "../parts/base-style.ts";
import type { PlantTime } from "../words/plant-time.ts";
import "../parts/said-list.ts";
import "../parts/shift-record.ts";
import "../parts/shift-signing.ts";
import "../parts/shift-work.ts";
import "../parts/shift-writing.ts";

/** A shift that runs has something new to tell all the time; a person who reads wants it to stand still for a while. */
const refreshMs = 30_000;
const listed = 42;

const states: Record<HandoverShifts["shifts"][number]["is"], string> = {
  open: "not signed",
  offered: "signed, not taken over",
  "taken over": "taken over",
};

/** What does the next shift need to know? */
export class HandoverView extends LitElement {
  static override properties = {
    plant: { attribute: false },
    feed: { attribute: false },
    time: { attribute: false },
    route: { attribute: false },
  };
  declare plant: Plant;
  declare feed: Feed;
  declare time: PlantTime;
  declare route: Extract<Route, { view: "handover" }>;
  #cursor = -1;
  #timer: ReturnType<typeof setInterval> | undefined;
  readonly #shifts = new Loaded<HandoverShifts>(this, (_, signal) => api.handoverShifts(listed, signal));
  readonly #record = new Loaded<BoundRecord>(this, (key, signal) =>
    api.shiftRecord(key === "" ? undefined : Number(key), signal),
  );
  readonly #said = new Loaded<Said>(this, (words, signal) => api.said(words, signal));

  constructor() {
    super();
    new Listening(this, () => this.feed?.watch(() => this.#heard()));
  }

  static override styles = [
    baseStyle,
    css`
      .sides {
        display: grid;
        grid-template-columns: minmax(0, 1fr) minmax(280px, 340px);
        gap: 8px;
        align-items: start;
      }
      .beside {
        display: grid;
        gap: 8px;
      }
      .head label,
      .head select {
        max-width: 100%;
      }
      .head form {
        display: flex;
        gap: 8px;
        align-items: center;
      }
      .head .links {
        display: flex;
        flex-wrap: wrap;
        gap: 8px;
      }
      @media (max-width: 1000px) {
        .sides {
          grid-template-columns: minmax(0, 1fr);
        }
      }
      section.card {
        margin-bottom: 8px;
      }
      @media print {
        .head,
        .beside {
          display: none;
        }
        .card {
          border: 0;
          padding: 0;
        }
        .sides {
          display: block;
        }
      }
    `,
  ];

  override connectedCallback(): void {
    super.connectedCallback();
    this.#timer = setInterval(() => this.#readAgain(), refreshMs);
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback();
    clearInterval(this.#timer);
  }

  override render() {
    const { at, words } = this.route;
    this.#shifts.want("shifts");
    this.#record.want(at === undefined ? "" : String(at));
    if (words) this.#said.want(words);
    const { value: bound, error } = this.#record;
    return html`
      ${this.#head(bound)}
      ${words ? this.#found(words) : nothing}
      ${error ? html`<p class="card" role="status">The record could not be read. ${error.message}</p>` : nothing}
      ${!bound && !error ? html`<p class="card" role="status">Drawing up the record …</p>` : nothing}
      ${bound ? this.#sides(bound) : nothing}
    `;
  }

  #head(bound: BoundRecord | undefined) {
    return html`<div class="head">
      <h1>Handover</h1>
      ${this.#chooser(bound)}
      ${
        bound
          ? html`<span class="links">
              <button @click=${() => print()}>Print</button>
              ${(["html", "csv", "json"] as const).map((format) => html`<a class="button" target="_self" download href=${api.shiftRecordFile(bound.record.shift.from, format)}>${format.toUpperCase()}</a>`)}
            </span>`
          : nothing
      }
      <form role="search" @submit=${this.#search}>
        <input name="words" type="search" aria-label="Look for words in all notes" placeholder="words in all notes" .value=${this.route.words ?? ""} />
        <button>Search</button>
      </form>
    </div>`;
  }

  #chooser(bound: BoundRecord | undefined) {
    const chosen = bound?.record.shift;
    const shifts = this.#shifts.value?.shifts ?? [];
    const known = chosen === undefined || shifts.some(({ shift }) => shift.from === chosen.from);
    return html`<label
      ><span class="unseen">Shift</span>
      <select @change=${this.#choose}>
        ${known ? nothing : html`<option value=${chosen!.from} selected>${this.#shiftWords(chosen!)}</option>`}
        ${shifts.map(
          ({ shift, is }, i) =>
            html`<option value=${shift.from} .selected=${shift.from === chosen?.from}>
              ${this.#shiftWords(shift)}${i === 0 ? " (now)" : ""}: ${states[is]}
            </option>`,
        )}
      </select></label
    >`;
  }

  #shiftWords({ from, to, name, team }: BoundRecord["record"]["shift"]): string {
    const { time } = this;
    const until = time.clock(to).slice(0, 5);
    return `${time.day(from)}, ${name}${team === undefined ? "" : ` ${team}`}, ${time.clock(from).slice(0, 5)} to ${until}`;
  }

  #sides(bound: BoundRecord) {
    const { plant, time } = this;
    const now = this.feed.now();
    const mayWrite = plant.person.role !== "viewer";
    return html`<div class="sides">
      <mill-shift-record class="card" .bound=${bound}></mill-shift-record>
      <div class="beside">
        ${
          mayWrite
            ? html`<mill-shift-work class="card" .bound=${bound} .time=${time} @written=${this.#readAgain}></mill-shift-work>
              <mill-shift-signing class="card" .bound=${bound} .person=${plant.person} .invented=${this.#shifts.value?.invented ?? []} .now=${now} @written=${this.#readAgain}></mill-shift-signing>
              <mill-shift-writing class="card" .bound=${bound} .time=${time} .now=${now} @written=${this.#readAgain}></mill-shift-writing>`
            : html`<p class="card quiet">${plant.person.name} may read here. Writing and signing need an operator.</p>`
        }
      </div>
    </div>`;
  }

  #found(words: string) {
    const { value, error } = this.#said;
    return html`<section class="card beside" aria-label="Found">
      ${error ? html`<p role="status">It could not be looked for. ${error.message}</p>` : nothing}
      ${value ? html`<mill-said-list .said=${value} .words=${words} .time=${this.time} .now=${this.feed.now()}></mill-said-list>` : nothing}
      <p><a href=${href({ view: "handover", at: this.route.at })}>Close the search</a></p>
    </section>`;
  }

  /** Somebody else may have written or signed. */
  #heard(): void {
    const newest = this.feed.events.findLast(({ handover }) => handover !== undefined)?.cursor ?? 0;
    if (newest <= this.#cursor) return;
    this.#cursor = newest;
    this.#readAgain();
  }

  #readAgain = (): void => {
    this.#record.refresh();
    this.#shifts.refresh();
  };

  #choose(event: Event): void {
    this.#go({ view: "handover", at: Number((event.target as HTMLSelectElement).value) });
  }

  #search(event: SubmitEvent): void {
    event.preventDefault();
    const words = String(new FormData(event.target as HTMLFormElement).get("words")).trim();
    this.#go({ view: "handover", at: this.route.at, ...(words === "" ? {} : { words }) });
  }

  #go(route: Route): void {
    this.dispatchEvent(new CustomEvent("go", { detail: { route, replace: false }, bubbles: true, composed: true }));
  }
}
customElements.define("mill-handover-view", HandoverView);
