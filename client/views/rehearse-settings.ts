import { css, html, LitElement, nothing } from "lit";
import type { AlarmRule, LimitSet } from "../../core/limit-set/index.ts";
import type { Setting } from "../../core/rehearsal/index.ts";
import { baseStyle } from "../parts/base-style.ts";
import { figure } from "../words/quantity.ts";
import { numberWords } from "../words/setting-words.ts";

/** A number that a person changed, by its place in the limit set. */
export interface Changed {
  setting: Setting;
  value: number;
}

const delays = ["onDelay.readings", "onDelay.of", "onDelay.seconds", "offDelay.readings", "offDelay.seconds"] as const;
const ofWatch = ["limit", "deadband", "share", "periods", "timeConstantMinutes", "withinMinutes", "fromRatio"] as const;
type NumberName = (typeof delays)[number] | (typeof ofWatch)[number];

/** Every number of a limit set as a field; tells "numbers-changed" with all that differ from it, and "rule-changed" for what is no number. */
export class RehearseSettings extends LitElement {
  static override properties = {
    inForce: { attribute: false },
    changed: { attribute: false },
    rules: { attribute: false },
  };
  declare inForce: LimitSet;
  declare changed: readonly Changed[];
  /** alarms with another priority or another way with untrusted readings, by key */
  declare rules: Readonly<Record<string, Partial<Pick<AlarmRule, "priority" | "untrusted">>>>;

  static override styles = [
    baseStyle,
    css`
      input {
        width: 12ch;
      }
      .changed {
        border-width: 2px;
        border-color: var(--ink);
        font-weight: 700;
      }
      .fields {
        display: flex;
        flex-wrap: wrap;
        gap: 6px 14px;
      }
      .fields label {
        display: inline-flex;
        gap: 6px;
        align-items: center;
      }
      details {
        border-top: 1px solid var(--rule);
        padding: 6px 0;
      }
      summary {
        cursor: pointer;
        min-height: 24px;
      }
    `,
  ];

  override render() {
    const { statistics, alarms } = this.inForce;
    return html`
      <div class="fields">
        ${(["t2", "q"] as const).map((name) => {
          const { confidence, limit } = statistics[name];
          const word = name === "t2" ? "T²" : "Q";
          return html`${
            confidence === undefined
              ? nothing
              : this.#field({ confidenceOf: name }, `${word}: confidence`, confidence, {
                  min: 0.5,
                  max: 0.9999,
                  step: 0.001,
                })
          }
          ${this.#field({ statistic: name }, `${word}: limit itself`, limit, { min: 0, step: "any" })}`;
        })}
        ${this.#field({ statistic: "nearest" }, "Nearest sample: limit", statistics.nearest.limit, { min: 0, step: "any" })}
      </div>
      ${alarms.map((rule) => this.#alarm(rule))}
    `;
  }

  #alarm(rule: AlarmRule) {
    const touched =
      this.rules[rule.key] !== undefined ||
      this.changed.some(({ setting }) => "alarm" in setting && setting.alarm === rule.key);
    const watches = rule.watches as unknown as Record<string, unknown>;
    return html`<details>
      <summary>${rule.title}${touched ? html` <b>— changed</b>` : nothing} <span class="quiet">${rule.priority}</span></summary>
      <div class="fields">
        ${ofWatch.filter((name) => typeof watches[name] === "number").map((name) => this.#number(rule, name, watches[name] as number))}
        ${delays.map((name) => {
          const [part, field] = name.split(".") as ["onDelay" | "offDelay", "readings" | "of" | "seconds"];
          return part === "offDelay" && field === "of" ? nothing : this.#number(rule, name, rule[part][field]);
        })}
        ${this.#choice(rule, "priority", ["high", "medium", "low", "record only"])}
        ${rule.watches.kind === "property" ? this.#choice(rule, "untrusted", ["hold", "evaluate", "suppress"]) : nothing}
      </div>
    </details>`;
  }

  #number({ key }: AlarmRule, number: NumberName, value: number | undefined) {
    return this.#field({ alarm: key, number }, numberWords[number], value, {
      min: number === "limit" ? undefined : 0,
      step: "any",
    });
  }

  #field(
    setting: Setting,
    word: string,
    value: number | undefined,
    range: { min?: number; max?: number; step: number | "any" },
  ) {
    const own = this.changed.find((each) => same(each.setting, setting));
    return html`<label
      >${word}
      <input
        type="number"
        class=${own ? "changed" : ""}
        min=${range.min ?? nothing}
        max=${range.max ?? nothing}
        step=${range.step}
        .value=${String(own?.value ?? rounded(value) ?? "")}
        title=${value === undefined ? "not set in the limits in force" : `in force: ${figure(value, 5)}`}
        @change=${(event: Event) => this.#take(setting, value, (event.target as HTMLInputElement).value)}
      />
    </label>`;
  }

  #choice(rule: AlarmRule, what: "priority" | "untrusted", choices: readonly string[]) {
    const now = this.rules[rule.key]?.[what] ?? rule[what];
    return html`<label
      >${what === "priority" ? "priority" : "an untrusted reading"}
      <select
        class=${now === rule[what] ? "" : "changed"}
        @change=${(event: Event) => {
          const detail = { key: rule.key, [what]: (event.target as HTMLSelectElement).value };
          this.dispatchEvent(new CustomEvent("rule-changed", { detail, bubbles: true, composed: true }));
        }}
      >
        ${choices.map((choice) => html`<option ?selected=${choice === now}>${choice}</option>`)}
      </select></label
    >`;
  }

  /** An empty field, or the number in force, takes the change back. */
  #take(setting: Setting, inForce: number | undefined, text: string): void {
    const others = this.changed.filter((each) => !same(each.setting, setting));
    const value = Number(text);
    const detail =
      text === "" || !Number.isFinite(value) || value === rounded(inForce) ? others : [...others, { setting, value }];
    this.dispatchEvent(new CustomEvent("numbers-changed", { detail, bubbles: true, composed: true }));
  }
}

/** As it is shown: nobody means the sixth digit. */
function rounded(value: number | undefined): number | undefined {
  return value === undefined ? undefined : Number(value.toPrecision(6));
}

export function same(a: Setting, b: Setting): boolean {
  return JSON.stringify(a) === JSON.stringify(b);
}

customElements.define("mill-rehearse-settings", RehearseSettings);
