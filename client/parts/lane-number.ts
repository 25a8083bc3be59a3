import { css, html, LitElement, nothing, type TemplateResult } from "lit";
import type { Judged, PlantProperty, PlantStream, Prediction, StreamNow } from "../../core/messages/index.ts";
import type { Freshness } from "../data/freshness.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { decimalsFor, fixed, named, thin } from "../words/quantity.ts";
import { evidence, verdictMeaning } from "../words/verdict-words.ts";
import { baseStyle } from "./base-style.ts";
import { verdictColour } from "./verdict-mark.ts";

/** What the property is now, and whether the number may be believed. A number that may not be believed never looks like one that may. */
export class LaneNumber extends LitElement {
  static override properties = {
    stream: { attribute: false },
    state: { attribute: false },
    chosen: { attribute: false },
    drawn: { attribute: false },
    freshness: { attribute: false },
    now: { attribute: false },
    time: { attribute: false },
  };
  declare stream: PlantStream;
  declare state: StreamNow | undefined;
  /** the property that stands big; its trend is drawn */
  declare chosen: PlantProperty;
  /** names of all whose trends are drawn */
  declare drawn: readonly string[];
  declare freshness: Freshness;
  declare now: number;
  declare time: PlantTime;
  static override styles = [
    baseStyle,
    css`
      h2 {
        display: flex;
        flex-wrap: wrap;
        align-items: baseline;
        gap: 0 8px;
      }
      h2 small {
        color: var(--quiet);
        font-weight: 400;
        font-size: 13px;
      }
      .property {
        color: var(--quiet);
        min-height: 21px;
      }
      .value {
        display: inline-block;
        margin: 4px 0 0;
        padding: 0 4px 0 0;
        font-size: 36px;
        line-height: 1.15;
        white-space: nowrap;
        border: 2px dashed transparent;
        border-left-width: 0;
      }
      .value small {
        font-size: 16px;
        color: var(--quiet);
      }
      .doubtful .value,
      .old .value {
        color: var(--quiet);
        padding: 0 8px;
        border: 2px dashed var(--edge);
        border-radius: 4px;
      }
      .old .value {
        padding: 0 6px;
        border: 6px solid;
        border-image: repeating-linear-gradient(135deg, var(--edge) 0 2px, transparent 2px 6px) 6;
      }
      .verdict {
        display: flex;
        gap: 6px;
        align-items: flex-start;
        margin-top: 8px;
      }
      .verdict mill-verdict-mark {
        margin: -5px 0 0 -2px;
      }
      .trusted {
        margin-top: 4px;
      }
      .age {
        margin-top: 4px;
        font-weight: 700;
      }
      .others {
        margin-top: 8px;
      }
      .others li {
        display: flex;
        align-items: center;
        gap: 4px;
        margin: 0 -6px;
      }
      .others .also {
        flex: none;
        padding: 2px 6px;
        min-height: 24px;
        font-size: 13px;
        color: var(--quiet);
        border-color: var(--rule);
      }
      .others .also[aria-pressed="true"] {
        color: var(--lane);
      }
      .others .large {
        flex: 1;
        display: flex;
        flex-wrap: wrap;
        justify-content: space-between;
        gap: 0 8px;
        border-color: transparent;
        padding: 2px 6px;
        min-height: 26px;
        text-align: left;
      }
      .others .large:hover {
        border-color: var(--edge);
      }
      .doubtful .others .whole,
      .old .others .whole {
        color: var(--quiet);
        border-bottom: 1px dashed var(--edge);
      }
    `,
  ];

  override render() {
    const { stream, state } = this;
    const latest = state?.latest ?? null;
    const old = this.freshness.kind === "old";
    const inside = latest?.verdict[0] === "inside";
    return html`<div class=${old ? "old" : inside || !latest ? "" : "doubtful"}>
      <h2>${stream.name} <small>${stream.id}</small></h2>
      <div class="property">${named(this.chosen.name)}</div>
      ${latest ? this.#value(latest, inside && !old) : this.#nothingYet()}
      ${this.freshness.kind === "old" ? this.#age(this.freshness.asOf, this.freshness.ageMs, this.freshness.says) : nothing}
      ${latest ? this.#verdict(latest, old) : nothing} ${latest && !inside ? this.#lastInside() : nothing}
      ${this.#others(latest, inside && !old)}
    </div>`;
  }

  #nothingYet() {
    const { periodMs } = this.stream;
    const trouble = this.state?.trouble ?? this.stream.trouble;
    return html`<div class="value" aria-hidden="true">—</div>
      <p class="quiet">${trouble ?? `No reading yet. One is due every ${duration(periodMs)} from the analyzer.`}</p>`;
  }

  #value(latest: Judged, believed: boolean): TemplateResult {
    const prediction = latest.properties[this.chosen.name];
    const { unit } = this.chosen;
    if (!prediction || prediction.value === null) {
      return html`<div class="value"><b>no number</b></div>`;
    }
    const decimals = this.#decimals(this.chosen, prediction);
    const around =
      believed && prediction.uncertainty !== null ? html`± ${fixed(prediction.uncertainty, decimals)}${thin}` : nothing;
    return html`<div class="value" title=${this.time.full(latest.time)}>
      <b style="font-weight:400">${fixed(prediction.value, decimals)}</b> <small>${around}${unit}</small>
    </div>`;
  }

  /** A number without an uncertainty of its own keeps the digits of the last that had one. */
  #decimals(property: PlantProperty, prediction: Prediction): number {
    const last = this.state?.lastInside?.properties[property.name]?.uncertainty;
    return decimalsFor(prediction.uncertainty ?? last ?? (property.scale[1] - property.scale[0]) / 100);
  }

  #age(asOf: number, ageMs: number, says: string) {
    return html`<p class="age">
      As of <span class="whole">${this.time.exact(asOf, this.now)}</span>, <span class="whole">${duration(ageMs)} old</span>:
      ${says}.
    </p>`;
  }

  #verdict(latest: Judged, old: boolean) {
    const worst = latest.verdict[0];
    const since = this.state?.verdictSince;
    const terms = evidence(latest);
    const when =
      since && worst !== "inside"
        ? html` since <span class="whole">${this.time.brief(since, this.now)}</span>`
        : nothing;
    return html`<div class="verdict" style="color:var(${old ? "--quiet" : verdictColour[worst]})" title=${verdictMeaning[worst]}>
      <mill-verdict-mark .verdict=${worst}></mill-verdict-mark>
      <span
        >${old ? "was " : ""}${worst}${when}${terms ? html` <span class="whole">(${terms})</span>` : nothing}
        ${latest.unusable ? html`<br />${latest.unusable}` : nothing}</span
      >
    </div>`;
  }

  #lastInside() {
    const last = this.state?.lastInside;
    const prediction = last?.properties[this.chosen.name];
    if (!last || !prediction || prediction.value === null) {
      return html`<p class="trusted quiet">No reading was inside yet.</p>`;
    }
    const decimals = decimalsFor(prediction.uncertainty);
    const around = prediction.uncertainty === null ? "" : ` ± ${fixed(prediction.uncertainty, decimals)}`;
    return html`<p class="trusted">
      Last inside: <span class="whole">${fixed(prediction.value, decimals)}${around}${thin}${this.chosen.unit}</span> at
      <span class="whole">${this.time.exact(last.time, this.now)}</span>
    </p>`;
  }

  #others(latest: Judged | null, believed: boolean) {
    const others = this.stream.properties.filter(({ name }) => name !== this.chosen.name);
    if (others.length === 0) return nothing;
    return html`<ul class="others">
      ${others.map((property) => {
        const prediction = latest?.properties[property.name];
        let words = "—";
        if (prediction && prediction.value !== null) {
          const decimals = this.#decimals(property, prediction);
          const around =
            believed && prediction.uncertainty !== null ? ` ± ${fixed(prediction.uncertainty, decimals)}` : "";
          words = `${fixed(prediction.value, decimals)}${around}${thin}${property.unit}`;
        }
        return html`<li>
          <button class="large" title="Write ${property.name} large and draw it" @click=${() => this.#tell("choose-property", property.name)}>
            <span>${named(property.name)}</span><span class="whole">${words}</span>
          </button>
          <button
            class="also"
            title="Draw ${property.name}, too"
            aria-label="Trend of ${property.name}, too"
            aria-pressed=${this.drawn.includes(property.name)}
            @click=${() => this.#tell("draw-too", property.name)}
          >
            trend
          </button>
        </li>`;
      })}
    </ul>`;
  }

  #tell(what: "choose-property" | "draw-too", name: string): void {
    this.dispatchEvent(new CustomEvent(what, { detail: name, bubbles: true, composed: true }));
  }
}
customElements.define("mill-lane-number", LaneNumber);
