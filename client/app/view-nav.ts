import { css, html, LitElement, nothing } from "lit";
import { baseStyle } from "../parts/base-style.ts";
import { defaultWindow, href, type Route, type ViewName } from "./route.ts";
import { viewNames, views } from "./views.ts";

/** The way to every view: a row of links, or on a narrow screen one button that says where one is and opens the list. */
export class ViewNav extends LitElement {
  static override properties = { route: { attribute: false }, open: { state: true } };
  declare route: Route;
  /** the list of a narrow screen is shown */
  declare open: boolean;

  constructor() {
    super();
    this.open = false;
  }

  static override styles = [
    baseStyle,
    css`
      ul {
        display: flex;
        flex-wrap: wrap;
        gap: 2px;
      }
      a {
        display: block;
        padding: 7px 10px 5px;
        border-bottom: 3px solid transparent;
        color: var(--quiet);
        text-decoration: none;
      }
      a:hover {
        color: var(--ink);
        border-color: var(--edge);
      }
      a[aria-current] {
        color: var(--ink);
        border-color: var(--ink);
      }
      a:focus-visible {
        outline-offset: -3px;
      }
      button {
        display: none;
      }
      @media (max-width: 700px) {
        button {
          display: inline-flex;
          margin: 4px 0;
        }
        ul {
          display: none;
        }
        .open ul {
          display: grid;
          grid-template-columns: repeat(auto-fill, minmax(8.5em, 1fr));
          padding-bottom: 4px;
        }
      }
      @media print {
        nav {
          display: none;
        }
      }
    `,
  ];

  override render() {
    const here = this.route.view;
    return html`<nav aria-label="Views" class=${this.open ? "open" : ""} @keydown=${this.#escape}>
      <button aria-expanded=${this.open} aria-controls="views" @click=${this.#toggle}>
        ${views[here].word} <span aria-hidden="true">${this.open ? "▴" : "▾"}</span><span class="unseen">: all views</span>
      </button>
      <ul id="views" @click=${this.#close}>
        ${viewNames.map(
          (view) =>
            html`<li><a href=${this.#hrefOf(view)} aria-current=${here === view ? "page" : nothing}>${views[view].word}</a></li>`,
        )}
      </ul>
    </nav>`;
  }

  #hrefOf(view: ViewName): string {
    if (view === "watch")
      return href({ view, window: this.route.view === "watch" ? this.route.window : defaultWindow });
    return href({ view } as Route);
  }

  #toggle(): void {
    this.open = !this.open;
  }

  #close(): void {
    this.open = false;
  }

  #escape(event: KeyboardEvent): void {
    if (event.key !== "Escape" || !this.open) return;
    this.open = false;
    this.renderRoot.querySelector("button")?.focus();
  }
}
customElements.define("mill-view-nav", ViewNav);
