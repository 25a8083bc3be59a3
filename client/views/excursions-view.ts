import { css, html, LitElement, nothing } from "lit";
import { type Excursion, type ExcursionLabel, excursionLabels, type Plant } from "../../core/messages/index.ts";
import { href, type Route } from "../app/route.ts";
import { api } from "../data/api.ts";
import type { Feed } from "../data/feed.ts";
import { Listening, ticking } from "../data/listening.ts";
import { Loaded } from "../data/loaded.ts";
import { centredOn } from "../data/time-window.ts";
import { baseStyle } from "../parts/base-style.ts";
import "../parts/verdict-mark.ts";
import { verdictColour } from "../parts/verdict-mark.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted, ratio, thin } from "../words/quantity.ts";
import { verdictOfKind } from "../words/verdict-words.ts";

const listed = 200;

/** What left the known, when, how far, and what made it? */
export class ExcursionsView extends LitElement {
  static override properties = {
    plant: { attribute: false },
    feed: { attribute: false },
    time: { attribute: false },
    route: { attribute: false },
    failed: { state: true },
  };
  declare plant: Plant;
  declare feed: Feed;
  declare time: PlantTime;
  declare route: Extract<Route, { view: "excursions" }>;
  /** why a label or a note was not taken */
  declare failed: string | undefined;
  #cursor = -1;
  readonly #loaded = new Loaded(this, (key, signal) =>
    api.excursions({ stream: key || undefined, limit: listed }, signal),
  );

  constructor() {
    super();
    ticking(this);
    new Listening(this, () => this.feed?.watch(() => this.#heard()));
  }

  static override styles = [
    baseStyle,
    css`
      .kind {
        display: flex;
        gap: 6px;
        white-space: nowrap;
      }
      td {
        vertical-align: top;
      }
      .kind mill-verdict-mark {
        margin-top: -6px;
      }
      .note {
        color: var(--quiet);
      }
      .note form {
        display: flex;
        gap: 8px;
      }
      td.says {
        min-width: 26ch;
        max-width: 60ch;
      }
      .links {
        white-space: nowrap;
      }
      .links a + a {
        margin-left: 12px;
      }
    `,
  ];

  override render() {
    const { plant, route, feed } = this;
    this.#loaded.want(route.stream ?? "");
    const { value, error, loading } = this.#loaded;
    const now = feed.now();
    return html`
      <div class="head">
        <h1>Excursions</h1>
        <label
          ><span class="unseen">Stream</span>
          <select @change=${this.#choose}>
            <option value="" ?selected=${!route.stream}>all streams</option>
            ${plant.streams.map(({ id, name }) => html`<option value=${id} ?selected=${id === route.stream}>${name} (${id})</option>`)}
          </select></label
        >
        <p class="quiet">
          An excursion is an unbroken time beyond a limit. Newest first${value && value.excursions.length >= listed ? `, the last ${listed}` : ""}.
        </p>
      </div>
      ${this.failed ? html`<p class="card" role="alert">The label was not taken. ${this.failed}</p>` : nothing}
      ${error ? html`<p class="card" role="status">The excursions could not be read. ${error.message}</p>` : nothing}
      ${!value && loading && !error ? html`<p class="card">Reading the excursions …</p>` : nothing}
      ${
        value && value.excursions.length === 0
          ? html`<p class="card">Nothing has been beyond a limit yet. When a stream is, it stands here with its peak and what made it.</p>`
          : nothing
      }
      ${value && value.excursions.length > 0 ? this.#table(value.excursions, now) : nothing}
    `;
  }

  #table(excursions: readonly Excursion[], now: number) {
    return html`<div class="card scrolls" tabindex="0" role="region" aria-label="Excursions">
      <table>
        <thead>
          <tr>
            <th scope="col">What</th>
            <th scope="col">Stream</th>
            <th scope="col">Began, ${this.time.zoneName(now)}</th>
            <th scope="col">Lasted</th>
            <th scope="col" class="number">Peak</th>
            <th scope="col">What made it</th>
            <th scope="col">What it was</th>
            <th scope="col"><span class="unseen">Links</span></th>
          </tr>
        </thead>
        <tbody>
          ${excursions.map((excursion) => this.#row(excursion, now))}
        </tbody>
      </table>
    </div>`;
  }

  /** Labels are the truth that limits are measured by: whoever knows says what it was. */
  #label(excursion: Excursion, now: number) {
    const { label, kind, start, stream } = excursion;
    const options: ("" | ExcursionLabel)[] = ["", ...excursionLabels];
    return html`<select
        aria-label="What the excursion of ${stream} at ${this.time.exact(start, now)} (${kind}) was"
        @change=${(event: Event) => void this.#setLabel(excursion, event.target as HTMLSelectElement)}
      >
        ${options.map((option) => html`<option value=${option} ?selected=${option === (label?.is ?? "")} ?disabled=${option === "" && label !== undefined}>${option || "not said"}</option>`)}
      </select>
      ${label ? html`<br /><span class="quiet">${label.by}, ${this.time.brief(label.at, now)}</span>` : nothing}`;
  }

  /** What a label cannot say. */
  #noteForm(excursion: Excursion) {
    const { kind, start, stream } = excursion;
    return html`<details class="note">
      <summary>Add a note</summary>
      <form @submit=${(event: SubmitEvent) => void this.#addNote(excursion, event)}>
        <input
          name="note"
          required
          maxlength="2000"
          aria-label="Note on the excursion of ${stream} at ${this.time.exact(start, this.feed.now())} (${kind})"
        />
        <button>Keep</button>
      </form>
    </details>`;
  }

  async #addNote(excursion: Excursion, event: SubmitEvent): Promise<void> {
    event.preventDefault();
    const form = event.target as HTMLFormElement;
    this.failed = undefined;
    try {
      await api.noteExcursion(excursion, String(new FormData(form).get("note")));
      form.reset();
      form.closest("details")?.removeAttribute("open");
      this.#loaded.refresh();
    } catch (error) {
      this.failed = (error as Error).message;
    }
  }

  async #setLabel(excursion: Excursion, select: HTMLSelectElement): Promise<void> {
    const label = excursionLabels.find((each) => each === select.value);
    if (!label) return;
    this.failed = undefined;
    try {
      await api.labelExcursion(excursion, label);
      this.#loaded.refresh();
    } catch (error) {
      this.failed = (error as Error).message;
      select.value = excursion.label?.is ?? "";
    }
  }

  #row(excursion: Excursion, now: number) {
    const { stream, kind, start, end, ended, peak, peakTime, unit, readings, says } = excursion;
    const { time, plant } = this;
    const verdict = verdictOfKind(kind);
    const isRatio = unit === "× limit";
    const window = centredOn({ kind: "live", spanMs: Math.max(900_000, ((end ?? now) - start) * 4) }, start, now);
    return html`<tr>
      <td>
        <span class="kind" style=${verdict ? `color:var(${verdictColour[verdict]})` : nothing}
          >${verdict ? html`<mill-verdict-mark .verdict=${verdict}></mill-verdict-mark>` : nothing}${kind}</span
        >
      </td>
      <td>${plant.streams.find(({ id }) => id === stream)?.name ?? stream} <span class="quiet whole">${stream}</span></td>
      <td class="whole" title=${time.full(start)}>${time.exact(start, now)}</td>
      <td class="whole">
        ${
          end === undefined
            ? html`<b>still open</b>, ${duration(now - start)}`
            : html`${duration(end - start)}${ended === "gap" ? html`<br /><span class="quiet">until readings stopped</span>` : nothing}`
        }
        <br /><span class="quiet">${counted(readings, "reading")}</span>
      </td>
      <td class="number" title="at ${time.full(peakTime)}"><span class="whole">${isRatio ? ratio(peak) : Number(peak.toPrecision(3))}${thin}${unit}</span></td>
      <td class="says">
        ${says} ${(excursion.notes ?? []).map((note) => html`<p class="quiet">${note.by}, ${time.brief(note.at, now)}: ${note.says}</p>`)}
        ${this.#noteForm(excursion)}
      </td>
      <td>${this.#label(excursion, now)}</td>
      <td class="links">
        <a href=${href({ view: "reading", stream, at: peakTime })}>Reading at the peak</a
        ><a href=${href({ view: "watch", window })}>On Watch</a>
      </td>
    </tr>`;
  }

  /** A new event may have opened or closed one. */
  #heard(): void {
    const newest = this.feed.events.at(-1)?.cursor ?? 0;
    if (newest === this.#cursor) return;
    this.#cursor = newest;
    this.#loaded.refresh();
  }

  #choose(event: Event): void {
    const stream = (event.target as HTMLSelectElement).value || undefined;
    const route: Route = { view: "excursions", stream };
    this.dispatchEvent(new CustomEvent("go", { detail: { route, replace: false }, bubbles: true, composed: true }));
  }
}
customElements.define("mill-excursions-view", ExcursionsView);
