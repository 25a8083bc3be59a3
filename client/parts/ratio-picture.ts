import { html, nothing, svg } from "lit";
import type { StatisticPicture } from "../../core/rehearsal/index.ts";
import { duration } from "../words/duration.ts";
import { figure, grouped, percent, ratio } from "../words/quantity.ts";

const width = 420;
const height = 150;

/** How one statistic went: its distribution beside the theory, the share beyond its limit, quantiles, and how long readings remember each other. */
export function ratioPicture(name: string, picture: StatisticPicture, periodMs: number) {
  const { readings, beyond, nominal, counts, expected, edges, quantiles, autocorrelation, worth } = picture;
  if (readings === 0) return html`<p>${name}: no usable reading in this stretch.</p>`;
  const most = Math.max(...counts, ...(expected ?? []));
  const x = (edge: number) => ((Math.log10(edge) + 3) / 5) * width;
  const y = (count: number) => height - (height - 12) * (count / most);
  const step = width / counts.length;
  const theory = expected?.map((count, i) => `${i === 0 ? "M" : "L"}${x(edges[i]) + step / 2} ${y(count)}`).join("");
  const forgotten = autocorrelation.findIndex((value) => value < 1 / Math.E);
  return html`<figure>
    <h3>${name}</h3>
    <svg viewBox="0 -4 ${width} ${height + 22}" role="img" aria-label="Distribution of ${name} ratio on a log scale, with the theory's curve">
      ${counts.map((count, i) => (count > 0 ? svg`<rect class="count" x=${x(edges[i])} y=${y(count)} width=${step} height=${height - y(count)} />` : nothing))}
      ${theory ? svg`<path class="theory" d=${theory} />` : nothing}
      ${svg`<line class="limit" x1=${x(1)} x2=${x(1)} y1="0" y2=${height} /><text x=${x(1) + 4} y="10">limit</text>`}
      ${[0.001, 0.01, 0.1, 1, 10, 100].map((at, i) => svg`<text x=${x(at)} y=${height + 14} text-anchor=${i === 0 ? "start" : i === 5 ? "end" : "middle"}>${at}</text>`)}
    </svg>
    <figcaption>
      ${percent(beyond)} of ${grouped(readings)} readings lie beyond the limit${nominal === null ? nothing : html`; its confidence promises ${percent(nominal)}`}.
      ${expected ? "The line is what the theory expects of the calibration's own kind." : "The model lacks what a theory would rest on."}
      ${
        worth === null
          ? nothing
          : html`Neighbours correlate by ${figure(autocorrelation[1], 2)}${forgotten > 0 ? html`, and readings remember each other for about ${duration(forgotten * periodMs)}` : nothing}:
              for a mean they are worth ${grouped(Math.round(worth))} independent ones, so delays that count readings help less than theory says.`
      }
    </figcaption>
    <details>
      <summary>Quantiles and autocorrelation</summary>
      <table>
        <thead><tr><th scope="col" class="number">Share below</th><th scope="col" class="number">Ratio seen</th><th scope="col" class="number">Ratio by theory</th></tr></thead>
        <tbody>
          ${quantiles.map((q) => html`<tr><td class="number">${percent(q.probability)}</td><td class="number">${ratio(q.seen)}</td><td class="number">${ratio(q.theory)}</td></tr>`)}
        </tbody>
      </table>
      <p>Correlation with the reading so many before: ${[1, 2, 5, 10, 20, 50, 100]
        .filter((lag) => autocorrelation[lag] !== undefined)
        .map((lag) => `${lag}: ${figure(autocorrelation[lag], 2)}`)
        .join(" · ")}</p>
    </details>
  </figure>`;
}
