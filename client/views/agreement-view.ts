import { css, html, LitElement, nothing } from "lit";
import { findingWords, whyNotCounted, writingFor } from "../../core/agreement/index.ts";
import type { Agreement, LabResult, Plant } from "../../core/messages/index.ts";
import type { Route } from "../app/route.ts";
import "../charts/inner-map.ts";
import "../charts/pair-chart.ts";
import { type PairPicture, pairPictures } from "../charts/pair-picture.ts";
import { api } from "../data/api.ts";
import type { Feed } from "../data/feed.ts";
import { Listening, ticking } from "../data/listening.ts";
import { Loaded } from "../data/loaded.ts";
import { baseStyle } from "../parts/base-style.ts";
import "../parts/lab-entry.ts";
import "../parts/lab-row.ts";
import { duration } from "../words/duration.ts";
import { innerWords } from "../words/inner-words.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted, decimalsFor, named } from "../words/quantity.ts";
import { agreementFigures } from "./agreement-figures.ts";

const dayMs = 86_400_000;
const choices = [7, 14, 30, 90, 365] as const;
const usualDays = 30;
/** so many results are listed at first, and more at a time when they are asked for */
const listedAtOnce = 20;
const engineers = new Set(["engineer", "administrator"]);

interface Shown {
  agreement: Agreement;
  results: LabResult[];
  pictures: PairPicture[];
  domain: [number, number];
}

/** Does the laboratory agree? The finding in words first, then what it rests on. */
export class AgreementView extends LitElement {
  static override properties = {
    plant: { attribute: false },
    feed: { attribute: false },
    time: { attribute: false },
    route: { attribute: false },
    listed: { state: true },
  };
  declare plant: Plant;
  declare feed: Feed;
  declare time: PlantTime;
  declare route: Extract<Route, { view: "agreement" }>;
  declare listed: number;
  #cursor = -1;
  readonly #loaded = new Loaded(this, (key, signal) => this.#read(key, signal));

  constructor() {
    super();
    this.listed = listedAtOnce;
    ticking(this);
    new Listening(this, () => this.feed?.watch(() => this.#heard()));
    this.addEventListener("entered", () => this.#loaded.refresh());
  }

  static override styles = [
    baseStyle,
    css`
      section {
        margin-bottom: 12px;
      }
      section h2 {
        margin-bottom: 6px;
      }
      .first {
        font-size: 18px;
        margin-bottom: 4px;
      }
      h3 {
        margin: 10px 0 2px;
        font-weight: 400;
        color: var(--quiet);
      }
      h3:first-of-type {
        margin-top: 0;
      }
      tbody th {
        color: var(--ink);
        border-bottom: 1px solid var(--rule);
      }
      .more {
        padding-top: 8px;
      }
      .inner {
        display: grid;
        grid-template-columns: repeat(auto-fill, minmax(260px, 1fr));
        gap: 16px;
      }
    `,
  ];

  override render() {
    const { stream, property, days } = this.#chosen();
    this.#loaded.want(JSON.stringify([stream?.id ?? "", property, days]));
    const { value, error, loading } = this.#loaded;
    return html`
      <div class="head">
        <h1>Agreement</h1>
        ${this.#choice(
          "Stream",
          this.plant.streams.map(({ id, name }) => [id, `${name} (${id})`]),
          stream?.id ?? "",
          (id) => ({ stream: id }),
        )}
        ${this.#choice(
          "Property",
          (stream?.properties ?? []).map(({ name }) => [name, name]),
          property,
          (name) => ({ property: name, stream: stream?.id, days: this.route.days }),
        )}
        ${this.#choice(
          "Samples of the last",
          choices.map((each) => [String(each), `${each} days`]),
          String(days),
          (text) => ({ days: Number(text), stream: stream?.id, property }),
        )}
      </div>
      ${error ? html`<p class="card" role="status">The laboratory's results could not be read. ${error.message}</p>` : nothing}
      ${!value && loading && !error ? html`<p class="card">Reading the laboratory's results …</p>` : nothing}
      ${value && stream ? this.#all(value, stream) : nothing}
    `;
  }

  #choice(
    word: string,
    options: readonly (readonly [string, string])[],
    chosen: string,
    wish: (value: string) => Partial<typeof this.route>,
  ) {
    return html`<label
      ><span class="unseen">${word}</span>
      <select @change=${(event: Event) => this.#go(wish((event.target as HTMLSelectElement).value))}>
        ${options.map(([value, name]) => html`<option value=${value} ?selected=${value === chosen}>${name}</option>`)}
      </select></label
    >`;
  }

  #all(shown: Shown, stream: Plant["streams"][number]) {
    const { agreement } = shown;
    const { mayChange } = this;
    return html`${this.#finding(shown)} ${this.#charts(shown)} ${this.#statistics(agreement)} ${this.#inner(agreement)}
      <section class="card" aria-label="Bring results in">
        <h2>Bring results in</h2>
        <mill-lab-entry
          .stream=${stream.id}
          .properties=${stream.properties}
          .property=${agreement.property}
          .time=${this.time}
          .now=${this.feed.now()}
          ?mayImport=${mayChange}
        ></mill-lab-entry>
      </section>
      ${this.#results(shown)}`;
  }

  #finding({ agreement }: Shown) {
    const { finding, property, unit, model, apart, pairing } = agreement;
    const write = writingFor(unit, finding.rmsecv ?? finding.scatter, this.time, this.feed.now());
    const [first, ...others] = findingWords(finding, write);
    const kept = apart.map(({ why, count }) => `${count} ${apartWords[why] ?? why}`).join(", ");
    return html`<section class="card" aria-label="Finding">
      <h2>${named(property)} beside the laboratory</h2>
      <p class="first">${first}</p>
      ${others.map((sentence) => html`<p>${sentence}</p>`)}
      ${kept ? html`<p>Not counted: ${kept}.</p>` : nothing}
      <p class="quiet">
        Model ${model?.name ?? "—"}. A result goes with the mean of the readings within ${duration(pairing.windowMs / 2)} of its
        sample${pairing.lagMs === 0 ? "" : `, ${duration(Math.abs(pairing.lagMs))} ${pairing.lagMs > 0 ? "before" : "after"} it (the line's lag)`}.
        Levels are cut where a cumulative sum of the differences leaves its course. Times are ${this.time.zoneName(this.feed.now())}.
      </p>
    </section>`;
  }

  #charts({ agreement, pictures, domain }: Shown) {
    if (agreement.pairs.time.length === 0) return nothing;
    const { charts, unit } = agreement;
    return html`<section class="card" aria-label="Differences over time">
      <h2>Differences over time, ${unit}</h2>
      ${pictures.map(
        (picture, i) => html`<h3>${picture.title}</h3>
          <mill-pair-chart
            ?tall=${i === 0}
            .picture=${picture}
            .time=${this.time}
            .domain=${domain}
            .label=${`${picture.title}: ${counted(picture.time.length, "pair")}, ${counted(picture.marked.size, "signal")}.`}
          ></mill-pair-chart>`,
      )}
      <p class="quiet">
        ${
          charts
            ? `Limits rest on the first ${charts.base} pairs. A filled diamond lies beyond its limit or stands out from all others. Thick lines are the levels that the finding speaks of.`
            : "Control limits need at least 15 pairs. Thick lines are the levels that the finding speaks of."
        }
      </p>
    </section>`;
  }

  #statistics({ statistics, unit, finding }: Agreement) {
    return html`<section class="card scrolls" tabindex="0" role="region" aria-label="Statistics">
      <h2>Statistics</h2>
      ${
        statistics
          ? agreementFigures(statistics, unit, finding.rmsecv)
          : html`<p>With fewer than three pairs that count there is nothing to work out.</p>`
      }
      ${
        finding.stretches.length > 1
          ? html`<p class="quiet">They are of all pairs shown, across the levels above: a bias that came and went is in them as scatter.</p>`
          : nothing
      }
    </section>`;
  }

  #inner({ inner, pairs }: Agreement) {
    if (inner.length === 0 || pairs.time.length === 0) return nothing;
    return html`<section class="card" aria-label="Inner relation">
      <h2>Spectrum and value together, component by component</h2>
      <p class="quiet">
        t is what the spectrum says, u what the value asks for (both after the components before). Rings are calibration samples, crosses the
        pairs; a ringed cross is further from the line than the calibration allows (1 %).
      </p>
      <div class="inner">
        ${inner.map(
          (place) => html`<figure>
            <h3>Component ${place.component}</h3>
            <mill-inner-map .place=${place} .label=${`Component ${place.component}: ${innerWords(place)}`}></mill-inner-map>
            <figcaption>${innerWords(place)}</figcaption>
          </figure>`,
        )}
      </div>
    </section>`;
  }

  #results({ results, agreement }: Shown) {
    const { finding, model, property } = agreement;
    const decimals = decimalsFor(finding.rmsecv ?? finding.scatter) + 1;
    return html`<section class="card" aria-label="Results">
      <h2>Results of ${property}, newest sample first</h2>
      ${results.length === 0 ? html`<p>None in this time. They come in by the form above, a table, or messages on <code>…/lab</code>.</p>` : nothing}
      ${results.slice(0, this.listed).map(
        (result) => html`<mill-lab-row
          .result=${result}
          .time=${this.time}
          .now=${this.feed.now()}
          .decimals=${decimals}
          .apart=${whyNotCounted(result, model?.id ?? "")}
          ?mayChange=${this.mayChange}
        ></mill-lab-row>`,
      )}
      ${
        results.length > this.listed
          ? html`<p class="more"><button @click=${this.#more}>Show more, ${results.length - this.listed} are older</button></p>`
          : nothing
      }
    </section>`;
  }

  #more(): void {
    this.listed += 3 * listedAtOnce;
  }

  private get mayChange(): boolean {
    return engineers.has(this.plant.person.role);
  }

  #chosen() {
    const { plant, route } = this;
    const stream = plant.streams.find(({ id }) => id === route.stream) ?? plant.streams[0];
    const names = stream?.properties.map(({ name }) => name) ?? [];
    const property = names.find((name) => name === route.property) ?? names.at(-1) ?? "";
    return { stream, property, days: route.days ?? usualDays };
  }

  async #read(key: string, signal: AbortSignal): Promise<Shown> {
    const [stream, property, days] = JSON.parse(key) as [string, string, number];
    const to = Math.ceil(this.feed.now() / 60_000) * 60_000;
    const query = { property, from: to - days * dayMs, to };
    const [agreement, { results }] = await Promise.all([
      api.agreement(stream, query, signal),
      api.lab(stream, query.from, to, signal),
    ]);
    const first = agreement.pairs.time[0] ?? query.from;
    const room = (to - first) * 0.02;
    const ours = results.filter((result) => result.property === property);
    return { agreement, results: ours, pictures: pairPictures(agreement), domain: [first - room, to] };
  }

  #go(wish: Partial<typeof this.route>): void {
    this.listed = listedAtOnce;
    const route: Route = { view: "agreement", ...wish };
    this.dispatchEvent(new CustomEvent("go", { detail: { route, replace: false }, bubbles: true, composed: true }));
  }

  /** A result that came in, or a new model, may have changed the picture. */
  #heard(): void {
    const newest = this.feed.events.findLast(({ kind }) => kind.startsWith("lab result") || kind === "limits in force");
    if (!newest || newest.cursor === this.#cursor) return;
    this.#cursor = newest.cursor;
    this.#loaded.refresh();
  }
}

const apartWords: Record<string, string> = {
  "not inside": "beside readings that were not inside",
  "process moved": "while the process moved",
  withdrawn: "withdrawn",
  "another model": "predicted by another model",
};

customElements.define("mill-agreement-view", AgreementView);
