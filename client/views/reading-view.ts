import { css, html, LitElement, nothing } from "lit";
import type { Plant, PlantStream, ReadingView as ReadingAnswer, Region } from "../../core/messages/index.ts";
import { href, type Route } from "../app/route.ts";
import { regionName } from "../charts/panel-drawing.ts";
import type { PanelPicture } from "../charts/panel-picture.ts";
import { pictureSheet } from "../charts/picture-sheet.ts";
import type { SpectrumPanel } from "../charts/spectrum-panel.ts";
import "../charts/spectrum-panel.ts";
import "../charts/place-map.ts";
import { api } from "../data/api.ts";
import { readingCsv } from "../data/csv.ts";
import type { Feed } from "../data/feed.ts";
import { ticking } from "../data/listening.ts";
import { Loaded } from "../data/loaded.ts";
import { nearestSamples } from "../data/nearest-samples.ts";
import { fileName, saveFile } from "../data/save-file.ts";
import { centredOn, type TimeWindow } from "../data/time-window.ts";
import { baseStyle } from "../parts/base-style.ts";
import { verdictColour } from "../parts/verdict-mark.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { axisUnit, decimalsFor, figure, fixed, grouped, named, percent, ratio, thin } from "../words/quantity.ts";
import { verdictMeaning } from "../words/verdict-words.ts";
import { readingCircumstances } from "./reading-circumstances.ts";
import { readingPanels } from "./reading-panels.ts";

/** regions beyond these say little */
const listedRegions = 4;
const watchSpanMs = 3_600_000;

/** Why was this reading judged so? */
export class ReadingView extends LitElement {
  static override properties = {
    plant: { attribute: false },
    feed: { attribute: false },
    time: { attribute: false },
    route: { attribute: false },
    cursor: { state: true },
    takenApart: { state: true },
    told: { state: true },
  };
  declare plant: Plant;
  declare feed: Feed;
  declare time: PlantTime;
  declare route: Extract<Route, { view: "reading" }>;
  /** on the spectral axis */
  declare cursor: number | undefined;
  /** name of the property whose prediction is taken apart */
  declare takenApart: string | undefined;
  /** what became of copying or saving */
  declare told: string | undefined;
  readonly #loaded = new Loaded<ReadingAnswer>(this, (key, signal) => {
    const [stream, at] = key.split(" ");
    return api.reading(stream, at ? Number(at) : undefined, signal);
  });
  #panels: { of: ReadingAnswer; name: string; made: PanelPicture[] } | undefined;

  constructor() {
    super();
    ticking(this);
  }

  static override styles = [
    baseStyle,
    css`
      .body {
        display: grid;
        grid-template-columns: minmax(0, 1fr) 380px;
        gap: 8px;
        align-items: start;
      }
      .body[aria-busy="true"] {
        opacity: 0.55;
      }
      .panels {
        background: var(--lane);
        border: 1px solid var(--rule);
        border-radius: 6px;
        padding: 4px 0 4px;
      }
      .panels h2 {
        font-size: 13px;
        font-weight: 400;
        color: var(--quiet);
        padding: 4px 8px 0 64px;
        min-height: 22px;
      }
      .panels h2 span {
        color: var(--ink);
      }
      .take {
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 8px;
      }
      .facts {
        display: grid;
        gap: 8px;
      }
      .facts section {
        background: var(--lane);
        border: 1px solid var(--rule);
        border-radius: 6px;
        padding: 10px 14px;
      }
      .facts h2 {
        margin-bottom: 4px;
      }
      .verdict {
        display: flex;
        align-items: center;
        gap: 8px;
        font-size: 20px;
      }
      .verdict small {
        font-weight: 400;
        font-size: 15px;
      }
      .says {
        margin-top: 6px;
        font-size: 16px;
      }
      .facts table td,
      .facts table th {
        padding: 4px 8px 4px 0;
      }
      .axis {
        padding: 0 8px 4px 64px;
        font-size: 13px;
      }
      .doubted {
        color: var(--quiet);
        border-bottom: 1px dashed var(--edge);
      }
      .table {
        max-height: 320px;
        overflow: auto;
      }
      @media (min-width: 1600px) {
        .body {
          grid-template-columns: minmax(0, 1fr) 760px;
        }
        .facts {
          display: block;
          columns: 2;
          column-gap: 8px;
        }
        .facts section {
          break-inside: avoid;
          margin-bottom: 8px;
        }
      }
      @media (max-width: 1000px) {
        .body {
          grid-template-columns: minmax(0, 1fr);
        }
        .facts {
          order: -1;
          grid-template-columns: minmax(0, 1fr);
        }
      }
      @media (max-width: 400px) {
        .facts section {
          padding: 8px;
        }
        .facts table td,
        .facts table th {
          padding-right: 4px;
        }
        .panels h2 {
          padding-left: 12px;
        }
      }
    `,
  ];

  override render() {
    const stream = this.plant.streams.find(({ id }) => id === this.route.stream) ?? this.plant.streams[0];
    if (!stream) return html`<h1>Reading</h1><p class="card">No streams yet, so there is no reading to explain.</p>`;
    if (this.route.stream && stream.id !== this.route.stream) {
      return html`<h1>Reading</h1><p class="card">There is no stream ${this.route.stream} in this plant. <a href="/reading">Show another</a></p>`;
    }
    this.#loaded.want(`${stream.id} ${this.route.at === undefined ? "" : Math.round(this.route.at)}`);
    const { value, error, loading } = this.#loaded;
    const reading = value?.judged.stream === stream.id ? value : undefined;
    return html`
      ${this.#head(stream, reading)}
      ${error ? html`<p class="card" role="status">The reading could not be shown. ${error.message}</p>` : nothing}
      ${!reading && loading ? html`<p class="card">Reading …</p>` : nothing}
      ${reading ? this.#body(stream, reading, loading) : nothing}
    `;
  }

  #head(stream: PlantStream, reading: ReadingAnswer | undefined) {
    const { time } = this;
    const now = this.feed.now();
    const step = (at: number | null | undefined, words: string) =>
      at === null || at === undefined
        ? html`<button disabled>${words}</button>`
        : html`<a class="button" href=${href({ view: "reading", stream: stream.id, at })}>${words}</a>`;
    const at = reading?.judged.time;
    return html`<div class="head">
      <h1>Reading</h1>
      <label
        ><span class="unseen">Stream</span>
        <select @change=${this.#choose}>
          ${this.plant.streams.map((each) => html`<option value=${each.id} ?selected=${each.id === stream.id}>${each.name} (${each.id})</option>`)}
        </select></label
      >
      ${
        at === undefined
          ? nothing
          : html`<span title=${time.full(at)}
            ><b>${time.exact(at, now)}</b> <span class="quiet">${time.zoneName(at)}, ${duration(now - at)} ago</span></span
          >`
      }
      <span style="margin-left:auto"></span>
      ${step(reading?.previous, "◂ previous")} ${step(reading?.next, "next ▸")}
      ${step(reading?.excursions.previous, "◂ excursion")} ${step(reading?.excursions.next, "excursion ▸")}
      <a class="button" href=${href({ view: "reading", stream: stream.id })} @click=${this.#newest}>newest</a>
      ${at === undefined ? nothing : html`<a class="button" href=${href({ view: "watch", window: around(at, now) })}>Show on Watch</a>`}
      ${reading ? this.#takeAway(stream, reading) : nothing}
    </div>`;
  }

  /** What can be carried off: the numbers, by file or clipboard, and the charts. */
  #takeAway(stream: PlantStream, reading: ReadingAnswer) {
    const copy = async () => {
      await navigator.clipboard.writeText(readingCsv(reading));
      return "Copied.";
    };
    return html`<span class="take">
      <button @click=${() => saveFile(fileName(stream.id, reading.judged.time), readingCsv(reading))}>Save as CSV</button>
      ${navigator.clipboard ? html`<button @click=${() => this.#tell(copy)}>Copy as CSV</button>` : nothing}
      <button @click=${() => this.#tell(() => this.#savePicture(stream, reading))}>Save picture</button>
      <span role="status">${this.told ?? nothing}</span>
    </span>`;
  }

  async #tell(act: () => Promise<string>): Promise<void> {
    try {
      this.told = await act();
    } catch (error) {
      this.told = `Not done: ${(error as Error).message}`;
    }
  }

  async #savePicture(stream: PlantStream, reading: ReadingAnswer): Promise<string> {
    const panels = this.#panelsOf(stream, reading);
    const drawn = [...this.renderRoot.querySelectorAll<SpectrumPanel>("mill-spectrum-panel")];
    const parts = panels.flatMap(({ title }, i) => {
      const canvas = drawn[i]?.canvas;
      return canvas ? [{ caption: title, canvas }] : [];
    });
    const lines = readingCircumstances(stream, reading, { plant: this.plant, time: this.time, now: this.feed.now() });
    const picture = await pictureSheet({ title: `${stream.name} (${stream.id})`, lines, parts }, this);
    saveFile(fileName(stream.id, reading.judged.time, "png"), picture);
    return "Saved.";
  }

  #panelsOf(stream: PlantStream, reading: ReadingAnswer): PanelPicture[] {
    const property = stream.properties.find(({ name }) => name === this.takenApart) ?? stream.properties[0];
    const name = property?.name ?? "";
    if (this.#panels?.of !== reading || this.#panels.name !== name) {
      this.#panels = { of: reading, name, made: readingPanels(reading, property ?? { name, unit: "" }) };
    }
    return this.#panels.made;
  }

  /** Which prediction the last panel takes apart, where there are several. */
  #apart({ properties }: PlantStream) {
    if (properties.length < 2) return nothing;
    return html`<p class="axis">
      <label
        >Take apart
        <select
          @change=${(event: Event) => {
            this.takenApart = (event.target as HTMLSelectElement).value;
          }}
        >
          ${properties.map(({ name }) => html`<option value=${name} ?selected=${name === (this.takenApart ?? properties[0].name)}>${name}</option>`)}
        </select></label
      >
    </p>`;
  }

  #body(stream: PlantStream, reading: ReadingAnswer, busy: boolean) {
    const panels = this.#panelsOf(stream, reading);
    const { points, unit } = reading.axis;
    const domain: [number, number] = [Math.min(...points), Math.max(...points)];
    return html`<div class="body" aria-busy=${busy}>
      <div
        class="panels"
        @point-wavelength=${({ detail }: CustomEvent<number | undefined>) => {
          this.cursor = detail;
        }}
      >
        ${
          panels.length === 0
            ? html`<p class="axis">The spectrum of this reading is no longer kept; its numbers are.</p>`
            : nothing
        }
        ${panels.map(
          (picture, index) => html`
            <h2>${picture.title}${this.#atCursor(picture)}</h2>
            <mill-spectrum-panel
              ?tall=${index === 0}
              .picture=${picture}
              .cursor=${this.cursor}
              .withAxis=${index === 0 || index === panels.length - 1}
              .domain=${domain}
              .label=${`${picture.title}. Left and right move the cursor.`}
            ></mill-spectrum-panel>
          `,
        )}
        <p class="axis quiet">Axis: ${unit === "nm" ? "wavelength" : "wavenumber"}, ${axisUnit(unit)}</p>
        ${reading.explanation ? this.#apart(stream) : nothing} ${panels.length ? this.#table(panels, unit) : nothing}
      </div>
      <div class="facts">
        ${this.#verdict(reading)} ${this.#values(stream, reading)} ${this.#regions(reading)}
        ${this.#statistics(reading)} ${this.#place(reading)}
      </div>
    </div>`;
  }

  #atCursor({ axis, unit, lines, bars }: PanelPicture) {
    if (this.cursor === undefined || axis.length === 0) return nothing;
    const at = this.cursor;
    let index = 0;
    axis.forEach((point, each) => {
      if (Math.abs(point - at) < Math.abs(axis[index] - at)) index = each;
    });
    const values = [...lines, ...(bars ? [bars] : [])].map(({ label, values }) => {
      const value = values[index];
      return `${label} ${value === null ? "—" : figure(value)}`;
    });
    return html` · <span>${grouped(axis[index])} ${axisUnit(unit)}: ${values.join(", ")}</span>`;
  }

  #verdict({ judged, explanation }: ReadingAnswer) {
    const [worst, ...rest] = judged.verdict;
    return html`<section>
      <h2 class="verdict" style="color:var(${verdictColour[worst]})">
        <mill-verdict-mark .verdict=${worst}></mill-verdict-mark>${worst}${rest.length ? html`<small class="quiet">also ${rest.join(", ")}</small>` : nothing}
      </h2>
      <p class="says">${explanation?.says ?? judged.unusable ?? ""}</p>
      <p class="quiet">${verdictMeaning[worst]}</p>
    </section>`;
  }

  #values(stream: PlantStream, { judged }: ReadingAnswer) {
    const inside = judged.verdict[0] === "inside";
    const lastInside = this.feed.of(stream.id)?.lastInside;
    return html`<section>
      <h2>${inside ? "Predicted" : "Predicted, not to be believed"}</h2>
      <table>
        <tbody>
          ${stream.properties.map((property) => {
            const prediction = judged.properties[property.name];
            const value = prediction?.value ?? null;
            const known = prediction?.uncertainty ?? lastInside?.properties[property.name]?.uncertainty;
            const decimals = decimalsFor(known ?? (property.scale[1] - property.scale[0]) / 100);
            const around = inside && prediction?.uncertainty ? ` ± ${fixed(prediction.uncertainty, decimals)}` : "";
            return html`<tr>
              <td>${named(property.name)}</td>
              <td class="number">
                <span class="whole ${inside ? "" : "doubted"}"
                  >${value === null ? "no number" : `${fixed(value, decimals)}${around}${thin}${property.unit}`}</span
                >
              </td>
            </tr>`;
          })}
        </tbody>
      </table>
    </section>`;
  }

  #statistics({ judged, limits, model }: ReadingAnswer) {
    const rows = [
      { name: "T²", says: "amounts", value: judged.t2, limit: limits.t2, of: judged.ratios.t2 },
      { name: "Q", says: "shape", value: judged.q, limit: limits.q, of: judged.ratios.q },
      {
        name: "Nearest sample",
        says: "distance",
        value: judged.nearest,
        limit: limits.nearest,
        of: judged.ratios.nearest,
      },
    ];
    return html`<section>
      <table>
        <caption>
          ${
            model
              ? html`Model ${model.name}, ${model.components} components; limit set ${judged.limitSet}; leverage
              ${judged.leverage === null ? "—" : figure(judged.leverage, 2)}`
              : "No model scored this reading."
          }
        </caption>
        <thead>
          <tr>
            <th scope="col">Statistic</th>
            <th scope="col" class="number">Value</th>
            <th scope="col" class="number">Limit</th>
            <th scope="col" class="number">Ratio</th>
          </tr>
        </thead>
        <tbody>
          ${rows.map(
            ({ name, says, value, limit, of }) => html`<tr>
              <td>${name} <span class="quiet">(${says})</span></td>
              <td class="number">${value === null ? "—" : figure(value)}</td>
              <td class="number">${figure(limit)}</td>
              <td class="number">${of !== null && of > 1 ? html`<b>${ratio(of)}</b>` : ratio(of)}</td>
            </tr>`,
          )}
        </tbody>
      </table>
    </section>`;
  }

  #place({ judged, samples, explanation }: ReadingAnswer) {
    const { t2, q } = judged.ratios;
    if (!samples || t2 === null || q === null) return nothing;
    const picture = {
      samples: samples.t2.map((each, index) => ({ t2: each, q: samples.q[index] })),
      reading: { t2, q, verdict: judged.verdict[0] },
    };
    const near = explanation ? nearestSamples(explanation.scores, samples, 3) : [];
    const words = `T² ratio ${ratio(t2)}, Q ratio ${ratio(q)}, among ${samples.names.length} calibration samples`;
    return html`<section>
      <h2>Its place among the calibration samples</h2>
      <mill-place-map .picture=${picture} .label=${`${words}.`}></mill-place-map>
      <p class="quiet">Filled: this reading. Open circles: the ${samples.names.length} calibration samples. Lines at 1: the limits.</p>
      ${
        near.length
          ? html`<p>
            Nearest samples: ${near.map(({ name, distance }) => `${name} (${distance.toFixed(1)})`).join(", ")}
            <span class="quiet">(distance in standard deviations of the scores)</span>
          </p>`
          : nothing
      }
    </section>`;
  }

  #regions({ explanation }: ReadingAnswer) {
    if (!explanation) return nothing;
    const list = (regions: readonly Region[], what: string, signed: boolean) =>
      html`<tr>
        <td>${what}</td>
        <td>
          ${
            regions.length === 0
              ? "no region stands out"
              : regions
                  .slice(0, listedRegions)
                  .map(
                    (region) =>
                      html`<div><span class="whole">${regionName(region)}</span>: ${percent(region.share)}${signed && !explanation.slopes ? (region.sign > 0 ? ", more than modelled" : ", less than modelled") : ""}</div>`,
                  )
          }
        </td>
      </tr>`;
    return html`<section>
      <h2>Where it comes from</h2>
      <table>
        <tbody>
          ${list(explanation.qRegions, "Q", true)} ${list(explanation.t2Regions, "T²", false)}
          ${explanation.predictions.map(({ name, regions }) => list(regions, named(name), false))}
        </tbody>
      </table>
    </section>`;
  }

  #table(panels: readonly PanelPicture[], unit: "nm" | "cm-1") {
    return html`<details class="axis">
      <summary>The charts as a table</summary>
      <div class="table" tabindex="0" role="region" aria-label="The charts as a table">
        ${panels.map(({ title, axis, lines, bars }) => {
          const columns = [...lines, ...(bars ? [bars] : [])];
          const step = Math.max(1, Math.ceil(axis.length / 60));
          return html`<table>
            <caption>
              ${title}${step > 1 ? `; every ${step}th channel` : ""}
            </caption>
            <thead>
              <tr>
                <th scope="col">${axisUnit(unit)}</th>
                ${columns.map(({ label }) => html`<th scope="col" class="number">${label}</th>`)}
              </tr>
            </thead>
            <tbody>
              ${axis
                .map((point, index) => ({ point, index }))
                .filter(({ index }) => index % step === 0)
                .map(
                  ({ point, index }) =>
                    html`<tr>
                      <td>${grouped(point)}</td>
                      ${columns.map(({ values }) => {
                        const value = values[index];
                        return html`<td class="number">${value === null ? "—" : figure(value)}</td>`;
                      })}
                    </tr>`,
                )}
            </tbody>
          </table>`;
        })}
      </div>
    </details>`;
  }

  #choose(event: Event): void {
    const stream = (event.target as HTMLSelectElement).value;
    const route: Route = { view: "reading", stream, at: this.route.at };
    this.dispatchEvent(new CustomEvent("go", { detail: { route, replace: false }, bubbles: true, composed: true }));
  }

  #newest(): void {
    // The key is the same as before when the newest was on the screen already: ask again.
    this.#loaded.refresh();
  }
}

function around(at: number, now: number): TimeWindow {
  return centredOn({ kind: "live", spanMs: watchSpanMs }, at, now);
}

customElements.define("mill-reading-view", ReadingView);
