import { css, html, LitElement, nothing } from "lit";
import { type OpenAlarm, type Plant, type ThemeChoice, themes } from "../../core/messages/index.ts";
import { calling, countOf } from "../data/alarm-order.ts";
import { api } from "../data/api.ts";
import { baseStyle } from "../parts/base-style.ts";
import "../parts/priority-mark.ts";
import type { PlantTime } from "../words/plant-time.ts";
import type { Route } from "./route.ts";
import { chooseTheme, chosenTheme } from "./theme-choice.ts";
import "./view-nav.ts";

const themeNames: Record<ThemeChoice, string> = {
  system: "as system",
  light: "light",
  dark: "dark",
};
/** Site, views, open alarms by priority, link, the plant's clock and zone, who is signed in, light or dark. */
export class TopBar extends LitElement {
  static override properties = {
    plant: { attribute: false },
    route: { attribute: false },
    alarms: { attribute: false },
    now: { attribute: false },
    time: { attribute: false },
    linkUp: { attribute: false },
  };
  declare plant: Plant;
  declare route: Route;
  declare alarms: OpenAlarm[];
  declare now: number;
  declare time: PlantTime;
  declare linkUp: boolean;
  static override styles = [
    baseStyle,
    css`
      header {
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 0 16px;
        padding: 0 16px;
        min-height: 46px;
        background: var(--lane);
        border-bottom: 1px solid var(--rule);
      }
      .site {
        font-size: 16px;
        font-weight: 700;
        display: flex;
        align-items: center;
        gap: 8px;
      }
      .site small {
        font-size: 13px;
        font-weight: 400;
        color: var(--quiet);
        border: 1px solid var(--edge);
        border-radius: 4px;
        padding: 0 6px;
      }
      .right {
        margin-left: auto;
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 4px 16px;
      }
      .counts {
        display: flex;
        gap: 14px;
        color: inherit;
        text-decoration: none;
        min-height: 28px;
        align-items: center;
        padding: 0 4px;
      }
      .counts.old {
        border: 2px dashed var(--edge);
        border-radius: 4px;
      }
      .counts span {
        display: flex;
        align-items: center;
        gap: 5px;
      }
      .counts .none {
        color: var(--quiet);
      }
      .link {
        display: flex;
        align-items: center;
        gap: 6px;
        color: var(--quiet);
      }
      .link.lost {
        color: var(--ink);
        font-weight: 700;
      }
      .clock b {
        font-weight: 400;
        font-size: 16px;
      }
      select {
        width: 11ch;
      }
      /* Ten views and the state of things do not fit one line of a laptop. */
      @media (max-width: 1750px) {
        mill-view-nav {
          order: 3;
          width: 100%;
        }
        .site,
        .right {
          min-height: 36px;
        }
      }
      @media (max-width: 700px) {
        header {
          padding: 4px 8px;
          gap: 0 12px;
        }
        .right {
          gap: 2px 12px;
          margin-left: 0;
        }
      }
    `,
  ];

  override render() {
    const { plant, now, time, linkUp } = this;
    const { name, role, signedIn } = plant.person;
    return html`<header>
      <div class="site">${plant.name} ${plant.demo ? html`<small title="Nothing on these screens is measured.">demo: invented plant</small>` : nothing}</div>
      <mill-view-nav .route=${this.route}></mill-view-nav>
      <div class="right">
        ${this.#counts()}
        <span class="link ${linkUp ? "" : "lost"}">${linkUp ? "link up" : "link lost"}</span>
        <span class="clock" title=${time.full(now)}
          ><b>${time.clock(now)}</b> <span class="quiet">${time.zoneName(now)}</span></span
        >
        <span>${name}${role ? html`<span class="quiet">, ${role}</span>` : nothing}</span>
        ${signedIn ? html`<button @click=${this.#signOut}>Sign out</button>` : nothing}
        <label
          ><span class="unseen">Light or dark</span>
          <select @change=${this.#theme}>
            ${themes.map((theme) => html`<option value=${theme} ?selected=${theme === chosenTheme()}>${themeNames[theme]}</option>`)}
          </select>
        </label>
      </div>
    </header>`;
  }

  #counts() {
    const counts = calling.map((priority) => ({ priority, ...countOf(this.alarms, priority) }));
    return html`<a
      class="counts ${this.linkUp ? "" : "old"}"
      href="/alarms"
      title="Open alarms${this.linkUp ? "" : " when the link was last heard"}: filled marks are not acknowledged"
    >
      <span class="unseen">Open alarms${this.linkUp ? "" : " when the link was last heard"}:</span>
      ${counts.map(
        ({ priority, open, waiting }) =>
          html`<span class=${open ? "" : "none"}
            ><mill-priority-mark .priority=${priority} ?filled=${waiting > 0} ?calm=${open === 0}></mill-priority-mark
            >${open}<span class="unseen"> ${priority}, ${waiting} not acknowledged.</span></span
          >`,
      )}
    </a>`;
  }

  async #signOut(): Promise<void> {
    await api.signOut();
    location.assign("/");
  }

  #theme(event: Event): void {
    const { value } = event.target as HTMLSelectElement;
    const theme = themes.find((each) => each === value);
    if (theme) chooseTheme(theme);
  }
}
customElements.define("mill-top-bar", TopBar);
