import { css } from "lit";

/** What every element of ours begins with: buttons, links, focus, tables, and text that only a screen reader meets. */
export const baseStyle = css`
  :host {
    display: block;
    box-sizing: border-box;
  }
  :host([hidden]) {
    display: none;
  }
  *,
  *::before,
  *::after {
    box-sizing: inherit;
  }
  h1,
  h2,
  h3,
  p,
  dl,
  dd,
  ul,
  ol,
  figure {
    margin: 0;
    padding: 0;
  }
  ul,
  ol {
    list-style: none;
  }
  h1 {
    font-size: 20px;
  }
  h2 {
    font-size: 16px;
  }
  h3 {
    font-size: 15px;
  }
  a {
    color: inherit;
    text-underline-offset: 3px;
  }
  button,
  .button {
    font: inherit;
    color: var(--ink);
    background: transparent;
    border: 1px solid var(--edge);
    border-radius: 4px;
    min-height: 28px;
    padding: 2px 12px;
    cursor: pointer;
    text-decoration: none;
    display: inline-flex;
    align-items: center;
    gap: 6px;
  }
  button:hover,
  .button:hover {
    background: var(--tone);
  }
  button[aria-pressed="true"],
  button[aria-pressed="true"]:hover {
    background: var(--ink);
    border-color: var(--ink);
    color: var(--lane);
  }
  button:disabled {
    color: var(--quiet);
    border-style: dashed;
    cursor: default;
  }
  select,
  input:not([type="checkbox"]) {
    font: inherit;
    color: var(--ink);
    background: var(--lane);
    border: 1px solid var(--edge);
    border-radius: 4px;
    min-height: 28px;
    padding: 2px 8px;
  }
  label,
  select,
  input {
    max-width: 100%;
  }
  /* over a view: its title, what it is about, and what can be chosen */
  .head {
    display: flex;
    flex-wrap: wrap;
    gap: 8px 16px;
    align-items: center;
    padding: 8px 0;
    min-height: 52px;
  }
  :focus-visible {
    outline: 3px solid var(--focus);
    outline-offset: 2px;
  }
  .quiet {
    color: var(--quiet);
  }
  .whole,
  td.number {
    white-space: nowrap;
  }
  .unseen {
    position: absolute;
    width: 1px;
    height: 1px;
    overflow: hidden;
    clip-path: inset(50%);
    white-space: nowrap;
  }
  table {
    border-collapse: collapse;
    width: 100%;
  }
  caption {
    text-align: left;
    color: var(--quiet);
    padding-bottom: 4px;
  }
  th,
  td {
    text-align: left;
    vertical-align: baseline;
    padding: 6px 12px 6px 0;
    border-bottom: 1px solid var(--rule);
  }
  th {
    font-weight: 400;
    color: var(--quiet);
    border-bottom-color: var(--edge);
  }
  th.number,
  td.number {
    text-align: right;
  }
  .scrolls {
    /* what stands at a fixed place in it (for screen readers) scrolls with it */
    position: relative;
    overflow-x: auto;
  }
  summary {
    cursor: pointer;
    min-height: 24px;
  }
  /* On paper nothing can be pressed; what is said stays. */
  @media print {
    button,
    .button,
    form,
    label:has(select) {
      display: none;
    }
  }
  .card {
    background: var(--lane);
    border: 1px solid var(--rule);
    border-radius: 6px;
    padding: 12px 16px;
  }
`;
