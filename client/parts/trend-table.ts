import { css, html, LitElement, nothing } from "lit";
import type { LabResult, PlantStream } from "../../core/messages/index.ts";
import { trendCsv } from "../data/csv.ts";
import { fileName, saveFile } from "../data/save-file.ts";
import { type TrendSight, trendRows, trendSentence } from "../data/trend-words.ts";
import { figure, named, withUnit } from "../words/quantity.ts";
import { baseStyle } from "./base-style.ts";

/** A lane's trends as sentences and rows, and what the laboratory found: the same as the chart for whoever cannot see it, or wants numbers. */
export class TrendTable extends LitElement {
  static override properties = {
    stream: { attribute: false },
    sights: { attribute: false },
    lab: { attribute: false },
  };
  declare stream: PlantStream;
  /** one for each property that is drawn; all of one trend */
  declare sights: readonly TrendSight[];
  declare lab: readonly LabResult[];
  static override styles = [
    baseStyle,
    css`
      .table {
        max-height: 260px;
        overflow: auto;
        padding: 0 12px 8px 52px;
      }
      button {
        float: right;
      }
      @media (max-width: 700px) {
        .table {
          padding-left: 12px;
        }
      }
    `,
  ];

  override render() {
    const { stream, sights } = this;
    const [{ time, now }] = sights;
    const columns = sights.map((sight) => trendRows(sight));
    return html`<div class="table" tabindex="0" role="region" aria-label="Table of ${stream.name}">
      <button @click=${this.#save}>Save all of it as CSV</button>
      <table>
        <caption>
          ${sights.map((sight) => html`<div>${trendSentence(sight)}</div>`)}
        </caption>
        <thead>
          <tr>
            <th scope="col">Time, ${time.zoneName(now)}</th>
            ${sights.map(({ property }) => html`<th scope="col">${named(property.name)}</th>`)}
            <th scope="col">Verdict</th>
            <th scope="col" class="number">T² ratio</th>
            <th scope="col" class="number">Q ratio</th>
          </tr>
        </thead>
        <tbody>
          ${columns[0].map(
            (row, i) => html`<tr>
              <td>${time.exact(row.at, now)}</td>
              ${columns.map((rows) => html`<td>${rows[i].value}</td>`)}
              <td>${row.verdict}</td>
              <td class="number">${row.t2}</td>
              <td class="number">${row.q}</td>
            </tr>`,
          )}
        </tbody>
      </table>
      ${this.lab.length > 0 ? this.#laboratory() : nothing}
    </div>`;
  }

  #laboratory() {
    const [{ time, now }] = this.sights;
    return html`<table>
      <caption>
        Results of the laboratory, by the time of the sample
      </caption>
      <thead>
        <tr>
          <th scope="col">Sample, ${time.zoneName(now)}</th>
          <th scope="col">Property</th>
          <th scope="col" class="number">Laboratory</th>
          <th scope="col" class="number">Predicted</th>
          <th scope="col">Pair</th>
        </tr>
      </thead>
      <tbody>
        ${this.lab.map(
          ({ time: at, property, value, unit, pair }) => html`<tr>
            <td title=${time.full(at)}>${time.exact(at, now)}</td>
            <td>${named(property)}</td>
            <td class="number">${withUnit(String(value), unit)}</td>
            <td class="number">${pair.predicted === null ? "—" : withUnit(figure(pair.predicted), unit)}</td>
            <td>${pair.apart === null ? "counts" : pair.says}</td>
          </tr>`,
        )}
      </tbody>
    </table>`;
  }

  #save(): void {
    const [sight] = this.sights;
    saveFile(fileName(this.stream.id, sight.from), trendCsv(sight.trend, this.stream.properties, sight));
  }
}
customElements.define("mill-trend-table", TrendTable);
