import { css, html, LitElement, nothing } from "lit";
import type { AlarmRule, KeptLimits, LimitSet } from "../../core/limit-set/index.ts";
import type { LimitSets, Plant } from "../../core/messages/index.ts";
import type { RehearsalRequest, Setting, Span, Sweeping } from "../../core/rehearsal/index.ts";
import { href, type Route } from "../app/route.ts";
import { api } from "../data/api.ts";
import type { Feed } from "../data/feed.ts";
import { Loaded } from "../data/loaded.ts";
import { Rehearsing } from "../data/rehearsing.ts";
import { baseStyle } from "../parts/base-style.ts";
import "../parts/range-entry.ts";
import "../parts/rehearsal-strip.ts";
import { ratioPicture } from "../parts/ratio-picture.ts";
import "../parts/sweep-map.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { counted, grouped } from "../words/quantity.ts";
import { settingWords } from "../words/setting-words.ts";
import { alarmsTable, outcomeTable, troublesTable } from "./rehearse-outcome.ts";
import { type Changed, same } from "./rehearse-settings.ts";

const day = 86_400_000;
const spans = [
  ["24 h", day],
  ["7 d", 7 * day],
  ["14 d", 14 * day],
  ["30 d", 30 * day],
] as const;
type RuleChange = Partial<Pick<AlarmRule, "priority" | "untrusted">>;
/** A person types; the answer should not chase every digit. */
const settleMs = 250;

/** What would other limits have done? Recorded history under the limits in force, and under others, before they go live. */
export class RehearseView extends LitElement {
  static override properties = {
    plant: { attribute: false },
    feed: { attribute: false },
    time: { attribute: false },
    route: { attribute: false },
    changed: { state: true },
    rules: { state: true },
    cuts: { state: true },
    cutStates: { state: true },
    axes: { state: true },
    said: { state: true },
    failed: { state: true },
  };
  declare plant: Plant;
  declare feed: Feed;
  declare time: PlantTime;
  declare route: Extract<Route, { view: "rehearse" }>;
  declare changed: readonly Changed[];
  declare rules: Readonly<Record<string, RuleChange>>;
  declare cuts: readonly Span[];
  declare cutStates: readonly string[];
  /** what the next sweep varies */
  declare axes: readonly Setting[];
  declare said: string | undefined;
  declare failed: string | undefined;
  readonly #sets = new Loaded(this, (stream, signal) => api.limitSets(stream, signal));
  readonly #kept = new Loaded(this, (stream, signal) => api.keptLimits(stream, signal));
  readonly #rehearsing = new Rehearsing(this);
  #asked = "";
  #taken = "";
  #settle: ReturnType<typeof setTimeout> | undefined;
  /** of the sweep that is shown, or runs */
  #sweep: Sweeping[] | undefined;
  #opened = Date.now();

  constructor() {
    super();
    this.#clear();
    this.axes = [];
  }

  static override styles = [
    baseStyle,
    css`
      section {
        margin-bottom: 12px;
      }
      section h2 {
        margin-bottom: 8px;
      }
      .pictures {
        display: grid;
        grid-template-columns: repeat(auto-fit, minmax(min(100%, 380px), 1fr));
        gap: 16px;
      }
      figure svg {
        display: block;
        width: 100%;
        height: auto;
      }
      figure text {
        fill: var(--quiet);
        font-size: 11px;
      }
      .count {
        fill: var(--edge);
      }
      .theory {
        fill: none;
        stroke: var(--ink);
        stroke-width: 1.5;
      }
      .limit {
        stroke: var(--ink);
        stroke-dasharray: 4 3;
      }
      summary {
        min-height: 24px;
        cursor: pointer;
      }
      .row {
        display: flex;
        flex-wrap: wrap;
        gap: 8px 16px;
        align-items: end;
        margin-top: 8px;
      }
      form {
        display: contents;
      }
      .row label {
        display: grid;
        gap: 2px;
      }
      progress {
        width: 16ch;
      }
      tbody th {
        color: var(--ink);
        border-bottom-color: var(--rule);
      }
    `,
  ];

  override render() {
    const { plant, route, said, failed } = this;
    const stream = this.#stream();
    this.#sets.want(stream);
    this.#kept.want(stream);
    const set = this.#sets.value?.inForce as LimitSet | null | undefined;
    if (set && set.stream === stream) this.#takeKept(set);
    const { from, to } = this.#range();
    if (set && set.stream === stream) this.#ask(stream, set);
    const { result, running } = this.#rehearsing;
    const trouble = this.#rehearsing.failed ?? this.#sets.error?.message;
    return html`
      <div class="head">
        <h1>Rehearse</h1>
        <label
          ><span class="unseen">Stream</span>
          <select @change=${(event: Event) => this.#go({ stream: (event.target as HTMLSelectElement).value, kept: undefined })}>
            ${plant.streams.map(({ id, name }) => html`<option value=${id} ?selected=${id === stream}>${name} (${id})</option>`)}
          </select></label
        >
        ${spans.map(
          ([word, span]) =>
            html`<button aria-pressed=${route.from === undefined ? span === 14 * day : Math.abs(to - from - span) < 60_000} @click=${() => this.#go({ from: this.#opened - span, to: this.#opened })}>${word}</button>`,
        )}
        <mill-range-entry .from=${from} .to=${to} .now=${this.#opened} .time=${this.time} @range-typed=${(event: CustomEvent<Span>) => this.#go(event.detail)}></mill-range-entry>
        <p class="quiet whole">${this.time.brief(from, Date.now() + 2 * day)} to ${this.time.brief(to, Date.now() + 2 * day)} ${this.time.zoneName(to)}</p>
      </div>
      <p role="status" class=${running || said ? "card" : "unseen"}>
        ${
          running
            ? html`${running.doing} <progress max=${running.total} value=${running.done} aria-label="done so far"></progress>
                ${running.restMs === null ? nothing : html`about ${duration(running.restMs)} more`}
                <button @click=${() => this.#rehearsing.cancel()}>Cancel</button>`
            : said
        }
      </p>
      ${failed ? html`<p class="card" role="alert">${failed}</p>` : nothing}
      ${trouble ? html`<p class="card" role="alert">${trouble}</p>` : nothing}
      ${set === null ? html`<p class="card">This stream has no limits yet: it has no usable model. Nothing can be rehearsed.</p>` : nothing}
      ${result && result.stretch.stream === stream && !trouble ? this.#outcome() : nothing}
      ${set ? html`${this.#numbers(set)} ${this.#sweeping(set)} ${this.#takeForward(set)}` : nothing}
    `;
  }

  #outcome() {
    const result = this.#rehearsing.result!;
    const { readings, cut, states } = result.stretch;
    const periodMs = this.plant.streams.find(({ id }) => id === result.stretch.stream)?.periodMs ?? 1000;
    const spacing = Math.max(periodMs, (result.inForce.days * day) / Math.max(1, readings));
    return html`
      <section class="card scrolls" tabindex="0" role="region" aria-label="What would have happened">
        <h2>What would have happened</h2>
        <p>${grouped(readings)} readings${cut.length > 0 ? html`, ${counted(cut.length, "stretch", "stretches")} left out` : nothing}.</p>
        <mill-rehearsal-strip .result=${result} .cuts=${cut} .time=${this.time} @stretch-cut=${(event: CustomEvent<Span>) => this.#change({ cuts: [...this.cuts, event.detail] })}></mill-rehearsal-strip>
        <div class="row">
          ${
            states.length > 0
              ? html`<span>Leave out while the process is:</span>
                  ${states.map(
                    (state) =>
                      html`<button aria-pressed=${this.cutStates.includes(state)} @click=${() => this.#change({ cutStates: toggled(this.cutStates, state) })}>${state}</button>`,
                  )}`
              : nothing
          }
          ${this.cuts.length > 0 ? html`<button @click=${() => this.#change({ cuts: [] })}>Leave nothing out by hand</button>` : nothing}
        </div>
        ${outcomeTable(result)}
      </section>
      <section class="card scrolls" tabindex="0" role="region" aria-label="Troubles"><h2>Troubles, found or missed</h2>${troublesTable(result, this.time)}</section>
      <section class="card scrolls" tabindex="0" role="region" aria-label="Alarm by alarm"><h2>Alarm by alarm</h2>${alarmsTable(result)}</section>
      ${
        result.pictures
          ? html`<section class="card" aria-label="As the statistics saw it">
              <h2>As the statistics saw it, under the limits in force</h2>
              <div class="pictures">${ratioPicture("T² ratio", result.pictures.t2, spacing)} ${ratioPicture("Q ratio", result.pictures.q, spacing)}</div>
            </section>`
          : nothing
      }
    `;
  }

  #numbers(set: LimitSet) {
    const anything = this.changed.length > 0 || Object.keys(this.rules).length > 0;
    return html`<section class="card" aria-label="Change a number">
      <h2>Change a number</h2>
      <mill-rehearse-settings
        .inForce=${set}
        .changed=${this.changed}
        .rules=${this.rules}
        @numbers-changed=${(event: CustomEvent<Changed[]>) => this.#change({ changed: event.detail })}
        @rule-changed=${(event: CustomEvent<RuleChange & { key: string }>) => this.#changeRule(set, event.detail)}
      ></mill-rehearse-settings>
      ${anything ? html`<p class="row"><button @click=${() => this.#change({ changed: [], rules: {} })}>Back to the limits in force</button></p>` : nothing}
    </section>`;
  }

  #sweeping(set: LimitSet) {
    const choices: Setting[] = [
      ...(["t2", "q"] as const).flatMap((name): Setting[] => [
        ...(set.statistics[name].confidence === undefined ? [] : [{ confidenceOf: name }]),
        { statistic: name },
      ]),
      ...set.alarms.flatMap(({ key, watches }): Setting[] => [
        { alarm: key, number: "onDelay.readings" },
        { alarm: key, number: "offDelay.readings" },
        ...("deadband" in watches ? [{ alarm: key, number: "deadband" as const }] : []),
        ...("limit" in watches ? [{ alarm: key, number: "limit" as const }] : []),
      ]),
    ];
    const axis = (i: number, word: string) => html`<label
        >${word}
        <select name="setting${i}">
          ${i === 1 ? html`<option value="">nothing else</option>` : nothing}
          ${choices.map((setting, k) => html`<option value=${k} ?selected=${this.axes[i] ? same(this.axes[i], setting) : false}>${settingWords(setting)}</option>`)}
        </select></label
      >
      <label>from <input name="from${i}" type="number" step="any" ?required=${i === 0} /></label>
      <label>to <input name="to${i}" type="number" step="any" ?required=${i === 0} /></label>
      <label>in steps <input name="steps${i}" type="number" min="2" max="50" value="5" /></label>`;
    const { result } = this.#rehearsing;
    return html`<section class="card" aria-label="Sweep two numbers">
      <h2>Sweep two numbers against each other</h2>
      <form @submit=${(event: SubmitEvent) => this.#startSweep(event, choices, set)}>
        <div class="row">${axis(0, "Vary")}</div>
        <div class="row">${axis(1, "and")}</div>
        <div class="row"><button>Sweep</button></div>
      </form>
      ${
        result?.sweep && this.#sweep
          ? html`<mill-sweep-map .sweep=${this.#sweep} .cells=${result.sweep.cells} .best=${result.sweep.best} @choice-taken=${(event: CustomEvent<number[]>) => this.#takeChoice(event.detail)}></mill-sweep-map>`
          : nothing
      }
    </section>`;
  }

  #takeForward(set: LimitSet) {
    const role = this.plant.person.role;
    const { limitSet } = this.#rehearsing.result ?? {};
    const kept = this.#kept.value?.kept ?? [];
    const mayChange = role === "engineer" || role === "administrator";
    return html`<section class="card" aria-label="Keep or propose">
      <h2>Keep, share, propose</h2>
      ${
        !mayChange
          ? html`<p>An engineer can keep and propose limits; ${this.plant.person.name} is here as ${role}.</p>`
          : limitSet
            ? html`<div class="row">
                <form @submit=${(event: SubmitEvent) => this.#keep(event, limitSet)}>
                  <label>Keep them as <input name="name" required maxlength="80" /></label><button>Keep</button>
                </form>
                <form @submit=${(event: SubmitEvent) => this.#propose(event, limitSet)}>
                  <label>Reason <input name="reason" required maxlength="2000" /></label>
                  <button>${this.#sets.value?.approval ? "Propose them, with this rehearsal" : "Put them in force, with this rehearsal"}</button>
                </form>
              </div>`
            : html`<p>Change a number first; what it does is shown above, and it can be kept or proposed here.</p>`
      }
      ${
        kept.length > 0
          ? html`<h3>Kept</h3>
              <ul>
                ${kept.map(
                  ({ name, author, time, base }) => html`<li class="row">
                    <a href=${href({ view: "rehearse", stream: set.stream, kept: name })}>${name}</a>
                    <span class="quiet">${author}, ${this.time.brief(time, Date.now())} ${this.time.zoneName(time)}, from version ${base}</span>
                    ${mayChange ? html`<button @click=${() => this.#do(() => api.dropKeptLimits(set.stream, name), `"${name}" is dropped.`)}>Drop</button>` : nothing}
                  </li>`,
                )}
              </ul>`
          : nothing
      }
      <p>Versions, proposals that wait, and the way back: <a href=${href({ view: "limits", stream: set.stream })}>Limits</a>.</p>
    </section>`;
  }

  #stream(): string {
    return this.route.stream ?? this.plant.streams[0]?.id ?? "";
  }

  #range(): Span {
    const { from, to } = this.route;
    return { from: from ?? this.#opened - 14 * day, to: to ?? this.#opened };
  }

  #clear(): void {
    this.changed = [];
    this.rules = {};
    this.cuts = [];
    this.cutStates = [];
    this.#sweep = undefined;
  }

  /** What a link names as kept is taken up once. */
  #takeKept(set: LimitSet): void {
    const { kept: name } = this.route;
    const key = `${set.stream} ${name ?? ""}`;
    if (key === this.#taken) return;
    if (name === undefined) {
      if (this.#taken !== "") this.#clear();
      this.#taken = key;
      return;
    }
    const found = this.#kept.value?.kept.find((each) => each.name === name && each.stream === set.stream);
    if (!found) return;
    this.#taken = key;
    this.#keptSet = { ...set, statistics: found.statistics, alarms: found.alarms };
    this.changed = [];
    this.rules = {};
    this.cuts = found.stretch.cuts;
    this.cutStates = found.stretch.cutStates;
    if (this.route.from === undefined) this.#go({ from: found.stretch.from, to: found.stretch.to }, true);
  }

  #keptSet: LimitSet | undefined;

  #request(set: LimitSet): RehearsalRequest {
    const { changed, rules, cuts, cutStates } = this;
    const base = this.route.kept === undefined ? undefined : this.#keptSet;
    const from = base ?? set;
    const alarms = from.alarms.map((rule) => ({ ...rule, ...rules[rule.key] }));
    const other = base !== undefined || Object.keys(rules).length > 0;
    return {
      ...this.#range(),
      cuts: [...cuts],
      cutStates: [...cutStates],
      ...(other ? { limitSet: { ...from, version: set.version, alarms } } : {}),
      settings: [...changed],
      pictures: true,
    };
  }

  #ask(stream: string, set: LimitSet): void {
    const key = JSON.stringify([stream, set.version, this.#request(set)]);
    if (key === this.#asked) return;
    const first = this.#asked === "";
    this.#asked = key;
    clearTimeout(this.#settle);
    this.#settle = setTimeout(() => void this.#rehearsing.start(stream, this.#request(set)), first ? 0 : settleMs);
  }

  #change(change: Partial<Pick<RehearseView, "changed" | "rules" | "cuts" | "cutStates">>): void {
    this.said = undefined;
    this.#sweep = undefined;
    Object.assign(this, change);
  }

  #changeRule(set: LimitSet, { key, ...change }: RuleChange & { key: string }): void {
    const rule = set.alarms.find((each) => each.key === key);
    const next = { ...this.rules[key], ...change };
    const differs = rule && Object.entries(next).some(([what, value]) => rule[what as keyof RuleChange] !== value);
    const { [key]: _, ...others } = this.rules;
    this.#change({ rules: differs ? { ...others, [key]: next } : others });
  }

  #startSweep(event: SubmitEvent, choices: readonly Setting[], set: LimitSet): void {
    event.preventDefault();
    const form = new FormData(event.target as HTMLFormElement);
    const sweep = [0, 1].flatMap((i): Sweeping[] => {
      const [place, from, to, steps] = ["setting", "from", "to", "steps"].map((name) =>
        String(form.get(`${name}${i}`)),
      );
      if (place === "" || from === "" || to === "") return [];
      return [{ setting: choices[Number(place)], values: valuesOf(Number(from), Number(to), Number(steps)) }];
    });
    this.axes = sweep.map(({ setting }) => setting);
    this.#sweep = sweep;
    void this.#rehearsing.start(this.#stream(), { ...this.#request(set), sweep });
  }

  #takeChoice(values: readonly number[]): void {
    const taken = (this.#sweep ?? []).map(({ setting }, i): Changed => ({ setting, value: values[i] }));
    const others = this.changed.filter(({ setting }) => !taken.some((each) => same(each.setting, setting)));
    this.changed = [...others, ...taken];
  }

  #keep(event: SubmitEvent, limitSet: LimitSet): void {
    event.preventDefault();
    const name = String(new FormData(event.target as HTMLFormElement).get("name"));
    const stretch: KeptLimits["stretch"] = { ...this.#range(), cuts: [...this.cuts], cutStates: [...this.cutStates] };
    void this.#do(
      () => api.keepLimits(limitSet.stream, name, limitSet, stretch),
      `Kept as "${name}"; the link to it below can be sent to others.`,
    );
  }

  #propose(event: SubmitEvent, limitSet: LimitSet): void {
    event.preventDefault();
    const reason = String(new FormData(event.target as HTMLFormElement).get("reason"));
    const { approval } = this.#sets.value as LimitSets;
    const done = approval
      ? "Proposed; another person must approve it under Limits."
      : "In force from the next reading on.";
    void this.#do(async () => {
      await api.changeLimits(limitSet.stream, limitSet, reason, this.#rehearsing.id);
      this.#clear();
    }, done);
  }

  async #do(ask: () => Promise<unknown>, done: string): Promise<void> {
    this.said = undefined;
    this.failed = undefined;
    try {
      await ask();
      this.said = done;
      this.#kept.refresh();
      this.#sets.refresh();
    } catch (error) {
      this.failed = (error as Error).message;
    }
  }

  #go(change: Partial<Omit<RehearseView["route"], "view">>, replace = false): void {
    const route: Route = { ...this.route, ...change, view: "rehearse" };
    this.dispatchEvent(new CustomEvent("go", { detail: { route, replace }, bubbles: true, composed: true }));
  }
}

function toggled(states: readonly string[], state: string): string[] {
  return states.includes(state) ? states.filter((each) => each !== state) : [...states, state];
}

/** Evenly from one to the other, both included, without the dust of floating point. */
function valuesOf(from: number, to: number, steps: number): number[] {
  const count = Math.max(2, Math.min(50, Math.round(steps)));
  return Array.from({ length: count }, (_, i) => Number((from + ((to - from) * i) / (count - 1)).toPrecision(10)));
}

customElements.define("mill-rehearse-view", RehearseView);
