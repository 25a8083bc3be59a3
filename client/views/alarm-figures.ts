import { css, html, LitElement, nothing } from "lit";
import type { Performance, Plant } from "../../core/messages/index.ts";
import { api } from "../data/api.ts";
import { Loaded } from "../data/loaded.ts";
import { baseStyle } from "../parts/base-style.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted, fixed, percent, thin } from "../words/quantity.ts";

const dayMs = 86_400_000;
const spans = [1, 7, 30] as const;

/** How well does the alarm system itself do? Each figure beside the published one, with its source. */
export class AlarmFigures extends LitElement {
  static override properties = {
    plant: { attribute: false },
    now: { attribute: false },
    time: { attribute: false },
    days: { state: true },
    history: { state: true },
  };
  declare plant: Plant;
  declare now: number;
  declare time: PlantTime;
  declare days: number;
  /** count what recorded history brought in, too */
  declare history: boolean;
  readonly #loaded = new Loaded<Performance>(this, (key, signal) => {
    const [days, history] = key.split(" ");
    const to = this.now;
    return api.alarmPerformance({ from: to - Number(days) * dayMs, to, history: history === "true" }, signal);
  });

  constructor() {
    super();
    this.days = 7;
    this.history = false;
  }

  static override styles = [
    baseStyle,
    css`
      .choice {
        display: flex;
        flex-wrap: wrap;
        gap: 8px 16px;
        align-items: center;
        margin: 8px 0;
      }
      .beyond td {
        font-weight: 700;
      }
      td.source {
        font-size: 13px;
        color: var(--quiet);
        min-width: 24ch;
      }
      .lists {
        display: grid;
        grid-template-columns: repeat(auto-fill, minmax(min(100%, 320px), 1fr));
        gap: 8px 24px;
        margin-top: 12px;
      }
    `,
  ];

  override render() {
    this.#loaded.want(`${this.days} ${this.history}`);
    const { value, error } = this.#loaded;
    return html`<section class="card" aria-label="How well the alarms do">
      <h2>How well the alarms do</h2>
      <div class="choice">
        ${spans.map((days) => html`<button aria-pressed=${this.days === days} @click=${() => this.#choose(days)}>${days === 1 ? "24 h" : `${days} d`}</button>`)}
        <label><input type="checkbox" .checked=${this.history} @change=${this.#withHistory} /> with recorded history</label>
        <button @click=${() => this.#loaded.refresh()}>Count again</button>
      </div>
      ${error ? html`<p role="status">The figures could not be counted. ${error.message}</p>` : nothing}
      ${value ? this.#figures(value) : nothing}
    </section>`;
  }

  #figures(figures: Performance) {
    const { annunciations, withheld, enough, days } = figures;
    return html`
      <p>
        ${counted(annunciations, "alarm")} called in ${counted(Math.round(days), "day")}${withheld > 0 ? `, ${withheld} more came while they were set aside` : ""}.
        ${enough ? nothing : html`<span class="quiet">The standards judge from at least 30 days: this is a first look.</span>`}
      </p>
      <div class="scrolls" tabindex="0" role="region" aria-label="Figures">
        <table>
          <thead>
            <tr>
              <th scope="col">Figure</th>
              <th scope="col" class="number">Here</th>
              <th scope="col">Recommended</th>
              <th scope="col">In words</th>
              <th scope="col">Source</th>
            </tr>
          </thead>
          <tbody>
            ${figures.figures.map(
              ({
                title,
                value,
                unit,
                recommended,
                rating,
                source,
              }) => html`<tr class=${rating === "beyond" ? "beyond" : ""}>
                <td>${title}</td>
                <td class="number">${value === null ? "—" : shown(value)}${unit ? thin + unit : ""}</td>
                <td>${recommended}</td>
                <td>${rating ?? "—"}</td>
                <td class="source">${source}</td>
              </tr>`,
            )}
          </tbody>
        </table>
      </div>
      <div class="lists">
        ${this.#priorities(figures)} ${this.#list("Most frequent", figures.mostFrequent, ({ count, percent: share }) => `${count} (${fixed(share, 0)}${thin}%)`)}
        ${this.#list("Chattering (three times in a minute)", figures.chattering, ({ worst }) => `${worst} in a minute`)}
        ${this.#list("Fleeting (gone within a minute)", figures.fleeting, ({ annunciations: times }) => counted(times, "time"))}
        ${this.#list("In alarm now", figures.standing, ({ since }) => `since ${this.time.brief(since, this.now)}`)}
        ${this.#list("In alarm for more than a day", figures.stale, ({ since }) => `since ${this.time.brief(since, this.now)}`)}
        ${this.#floods(figures)} ${this.#answers(figures)}
      </div>
    `;
  }

  #priorities({ byPriority }: Performance) {
    return html`<div>
      <h3>By priority</h3>
      <ul>
        ${byPriority.map(
          ({ priority, count, percent: share, recommended }) =>
            html`<li>${priority}: ${count}${share === null ? "" : `, ${percent(share / 100)}`} <span class="quiet">(about ${recommended}${thin}% is recommended)</span></li>`,
        )}
      </ul>
    </div>`;
  }

  #list<One extends { stream: string; title: string }>(
    title: string,
    ones: readonly One[],
    says: (one: One) => string,
  ) {
    if (ones.length === 0) return nothing;
    const name = (id: string) => this.plant.streams.find((stream) => stream.id === id)?.name ?? id;
    return html`<div>
      <h3>${title}</h3>
      <ul>
        ${ones.map((one) => html`<li>${name(one.stream)}: ${one.title} <span class="quiet">${says(one)}</span></li>`)}
      </ul>
    </div>`;
  }

  #floods({ floods }: Performance) {
    if (floods.length === 0) return nothing;
    return html`<div>
      <h3>Floods (more than 10 in 10 minutes, until fewer than 5)</h3>
      <ul>
        ${floods.map(
          ({ start, end, annunciations }) =>
            html`<li>${this.time.brief(start, this.now)}: ${counted(annunciations, "alarm")} ${end === null ? "so far" : `in ${duration(end - start)}`}</li>`,
        )}
      </ul>
    </div>`;
  }

  #answers({ acknowledging }: Performance) {
    const { acknowledged, never, medianMs, ninthDecileMs } = acknowledging;
    return html`<div>
      <h3>Acknowledging</h3>
      <ul>
        <li>${acknowledged} acknowledged, ${never} never</li>
        ${medianMs === null ? nothing : html`<li>half of them within ${duration(medianMs)}</li>`}
        ${ninthDecileMs === null ? nothing : html`<li>nine of ten within ${duration(ninthDecileMs)}</li>`}
      </ul>
    </div>`;
  }

  #choose(days: number): void {
    this.days = days;
  }

  #withHistory(event: Event): void {
    this.history = (event.target as HTMLInputElement).checked;
  }
}

function shown(value: number): string {
  return Number.isInteger(value) ? String(value) : fixed(value, Math.abs(value) >= 10 ? 0 : 2);
}

customElements.define("mill-alarm-figures", AlarmFigures);
