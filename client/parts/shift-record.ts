import { css, html, LitElement, unsafeCSS } from "lit";
import { unsafeHTML } from "lit/directives/unsafe-html.js";
import type { BoundRecord } from "../../core/messages/index.ts";
import { recordPage, recordStyle } from "../../core/shift-page/index.ts";
import { baseStyle } from "./base-style.ts";

/** A shift's record, as it is printed and exported: core makes the page, and escapes whatever anybody sent. */
export class ShiftRecordPage extends LitElement {
  static override properties = { bound: { attribute: false } };
  declare bound: BoundRecord;
  static override styles = [
    baseStyle,
    unsafeCSS(recordStyle),
    // Its tables are as wide as their numbers: on a narrow screen the record is moved sideways, not the page.
    css`
      @media screen {
        :host {
          overflow-x: auto;
        }
      }
    `,
  ];

  override render() {
    return html`${unsafeHTML(recordPage(this.bound).text)}`;
  }
}
customElements.define("mill-shift-record", ShiftRecordPage);
