import { css, html, LitElement, svg } from "lit";
import type { Priority } from "../../core/messages/index.ts";

const bars: Record<Priority, number> = { high: 3, medium: 2, low: 1, "record only": 0 };
export const priorityColour: Record<Priority, string> = {
  high: "--high",
  medium: "--medium",
  low: "--low",
  "record only": "--quiet",
};

/** Bars: three, two, one. Filled while the alarm waits to be acknowledged, an outline after. */
export class PriorityMark extends LitElement {
  static override properties = { priority: {}, filled: { type: Boolean }, calm: { type: Boolean } };
  declare priority: Priority | undefined;
  declare filled: boolean;
  /** nothing is open: the mark only names its column */
  declare calm: boolean;
  static override styles = css`
    :host {
      display: inline-block;
      line-height: 0;
    }
    svg {
      width: 18px;
      height: 16px;
    }
  `;

  override render() {
    if (!this.priority) return html``;
    const colour = `var(${this.calm ? "--quiet" : priorityColour[this.priority]})`;
    const bar = (index: number) =>
      this.filled
        ? svg`<rect x=${1 + index * 6} y="1" width="4.4" height="14" fill=${colour}></rect>`
        : svg`<rect x=${1.7 + index * 6} y="1.7" width="3" height="12.6" fill="none" stroke=${colour} stroke-width="1.4"></rect>`;
    return html`<svg viewBox="0 0 18 16" aria-hidden="true">
      ${Array.from({ length: bars[this.priority] }, (_, index) => bar(index))}
    </svg>`;
  }
}
customElements.define("mill-priority-mark", PriorityMark);
