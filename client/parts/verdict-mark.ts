import { css, html, LitElement, svg } from "lit";
import type { Verdict } from "../../core/messages/index.ts";

/** The colour role of each verdict: cool for doubt, none where nothing is doubted or nothing is there. */
export const verdictColour: Record<Verdict, string> = {
  inside: "--ink",
  sparse: "--sparse",
  extrapolated: "--far",
  unfamiliar: "--odd",
  unusable: "--quiet",
};

const ring = (dashes: string) =>
  svg`<ellipse cx="11" cy="16" rx="9" ry="5" fill="none" stroke="var(--ink)" stroke-width="1.6" stroke-dasharray=${dashes}></ellipse>`;
const dot = (x: number, y: number) => svg`<circle cx=${x} cy=${y} r="3.1" fill="currentColor"></circle>`;
const stalk = (path: string, dashes: string) =>
  svg`<path d=${path} fill="none" stroke="currentColor" stroke-width="1.6" stroke-dasharray=${dashes}></path>`;

/** Each mark pictures its word: the ring is the calibration, the dot is the reading. */
const pictures: Record<Verdict, unknown> = {
  inside: [ring("none"), dot(11, 16)],
  extrapolated: [ring("none"), stalk("M11 16H25", "2 2"), dot(26, 16)],
  unfamiliar: [ring("none"), stalk("M11 16V5", "none"), dot(11, 4)],
  sparse: [ring("1.6 3.2"), dot(11, 16)],
  unusable: ring("11 7"),
};

export class VerdictMark extends LitElement {
  static override properties = { verdict: {} };
  declare verdict: Verdict | undefined;
  static override styles = css`
    :host {
      display: inline-block;
      line-height: 0;
    }
    svg {
      width: 30px;
      height: 22px;
    }
  `;

  override render() {
    if (!this.verdict) return html``;
    return html`<svg viewBox="0 0 30 22" aria-hidden="true" style="color:var(${verdictColour[this.verdict]})">
      ${pictures[this.verdict]}
    </svg>`;
  }
}
customElements.define("mill-verdict-mark", VerdictMark);
