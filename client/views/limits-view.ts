import { css, html, LitElement, nothing } from "lit";
import type { LimitSet } from "../../core/limit-set/index.ts";
import type { LimitSets, Plant, RehearsalEvidence } from "../../core/messages/index.ts";
import type { Route } from "../app/route.ts";
import { api } from "../data/api.ts";
import type { Feed } from "../data/feed.ts";
import { Listening } from "../data/listening.ts";
import { Loaded } from "../data/loaded.ts";
import { baseStyle } from "../parts/base-style.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { figure, grouped, named, percent } from "../words/quantity.ts";
import { delayWords, watchWords } from "../words/watch-words.ts";

type Differences = LimitSets["versions"][number]["differences"];

/** A changed limit set that was read from a file, and in what it differs from the one in force. */
interface Draft {
  file: string;
  limitSet: LimitSet;
  differences: Differences;
}

/** What are the limits of a stream, who set them and why, and how does one get back? */
export class LimitsView extends LitElement {
  static override properties = {
    plant: { attribute: false },
    feed: { attribute: false },
    time: { attribute: false },
    route: { attribute: false },
    draft: { state: true },
    said: { state: true },
    failed: { state: true },
  };
  declare plant: Plant;
  declare feed: Feed;
  declare time: PlantTime;
  declare route: Extract<Route, { view: "limits" }>;
  declare draft: Draft | undefined;
  /** what came of the last command */
  declare said: string | undefined;
  declare failed: string | undefined;
  #cursor = -1;
  readonly #loaded = new Loaded(this, (stream, signal) => api.limitSets(stream, signal));

  constructor() {
    super();
    new Listening(this, () => this.feed?.watch(() => this.#heard()));
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
      td,
      th {
        vertical-align: top;
      }
      tbody th {
        color: var(--ink);
        font-weight: 400;
        border-bottom: 1px solid var(--rule);
      }
      table + table {
        margin-top: 20px;
      }
      form {
        display: flex;
        flex-wrap: wrap;
        gap: 8px;
        align-items: end;
        margin-top: 8px;
      }
      form label {
        display: grid;
        gap: 2px;
        flex: 1 1 28ch;
      }
      .changes li {
        padding: 1px 0;
      }
      .entry {
        border-top: 1px solid var(--rule);
        padding: 8px 0;
      }
    `,
  ];

  override render() {
    const { plant, route } = this;
    const stream = route.stream ?? plant.streams[0]?.id ?? "";
    this.#loaded.want(stream);
    const { value, error, loading } = this.#loaded;
    return html`
      <div class="head">
        <h1>Limits</h1>
        <label
          ><span class="unseen">Stream</span>
          <select @change=${this.#choose}>
            ${plant.streams.map(({ id, name }) => html`<option value=${id} ?selected=${id === stream}>${name} (${id})</option>`)}
          </select></label
        >
        <p class="quiet">Every change is a new version, with who, when and why; the readings before it keep the version that judged them.</p>
      </div>
      ${this.said ? html`<p class="card" role="status">${this.said}</p>` : nothing}
      ${this.failed ? html`<p class="card" role="alert">${this.failed}</p>` : nothing}
      ${error ? html`<p class="card" role="status">The limits could not be read. ${error.message}</p>` : nothing}
      ${!value && loading && !error ? html`<p class="card">Reading the limits …</p>` : nothing}
      ${value ? this.#all(value, stream) : nothing}
    `;
  }

  #all(sets: LimitSets, stream: string) {
    const set = sets.inForce as LimitSet | null;
    if (!set) {
      return html`<p class="card">This stream has no limits yet: it has no usable model. They are made when it has one.</p>`;
    }
    return html`${this.#waiting(sets, stream)} ${this.#inForce(set, stream)} ${this.#change(sets, set, stream)} ${this.#versions(sets, stream)}`;
  }

  #waiting({ proposals }: LimitSets, stream: string) {
    if (proposals.length === 0) return nothing;
    return html`<section class="card" aria-label="Waiting for approval">
      <h2>Waiting for another person's approval</h2>
      ${proposals.map(
        ({ id, author, reason, time, differences, evidence }) => html`<div class="entry">
          <p><b>Proposal ${id}</b>, ${author}, ${this.#when(time)}: ${reason}</p>
          ${this.#evidence(evidence)}
          ${changeList(differences)}
          ${
            this.#mayChange()
              ? html`<form @submit=${(event: SubmitEvent) => this.#withdraw(event, stream, id)}>
                  <button type="button" @click=${() => this.#do(() => api.approveLimits(stream, id))}>Approve proposal ${id}</button>
                  <label>Reason to withdraw it <input name="reason" required maxlength="2000" /></label>
                  <button>Withdraw it</button>
                </form>`
              : nothing
          }
        </div>`,
      )}
    </section>`;
  }

  #inForce(set: LimitSet, stream: string) {
    const unitOf = (name: string) =>
      this.plant.streams.find(({ id }) => id === stream)?.properties.find((property) => property.name === name)?.unit ??
      "";
    const statistic = (name: string, { method, confidence, residuals, limit }: LimitSet["statistics"]["q"]) => html`<tr>
      <th scope="row">${name}</th>
      <td class="number">${figure(limit, 4)}</td>
      <td>${methodWords[method] ?? method}${residuals ? html`, ${residuals} residuals` : nothing}</td>
      <td class="number">${confidence === undefined ? "—" : percent(confidence)}</td>
    </tr>`;
    return html`<section class="card scrolls" tabindex="0" role="region" aria-label="In force">
      <h2>Version ${set.version}, in force since ${this.#when(set.time)}</h2>
      <p>${by(set)}: ${set.reason}</p>
      <table>
        <thead>
          <tr>
            <th scope="col">Statistic</th>
            <th scope="col" class="number">Limit</th>
            <th scope="col">Worked out by</th>
            <th scope="col" class="number">Confidence</th>
          </tr>
        </thead>
        <tbody>
          ${statistic("T²", set.statistics.t2)} ${statistic("Q", set.statistics.q)}
          ${statistic("Nearest sample (distance)", set.statistics.nearest)}
        </tbody>
      </table>
      <table>
        <thead>
          <tr>
            <th scope="col">Alarm</th>
            <th scope="col">Priority</th>
            <th scope="col">When</th>
            <th scope="col">Comes after</th>
            <th scope="col">Goes after</th>
            <th scope="col">An untrusted reading</th>
            <th scope="col">What to do, within</th>
          </tr>
        </thead>
        <tbody>
          ${set.alarms.map(
            (rule) => html`<tr>
              <th scope="row">${rule.title}</th>
              <td class="whole">${rule.priority}</td>
              <td>${watchWords(rule.watches, unitOf)}</td>
              <td class="whole">${delayWords(rule.onDelay)}</td>
              <td class="whole">${delayWords(rule.offDelay)}</td>
              <td>${rule.watches.kind === "property" ? untrustedWords[rule.untrusted] : "—"}</td>
              <td>${rule.purpose.response} <span class="quiet whole">${rule.purpose.timeToRespondMinutes} min</span></td>
            </tr>`,
          )}
        </tbody>
      </table>
    </section>`;
  }

  #mayChange(): boolean {
    return mayChange.has(this.plant.person.role);
  }

  #change({ approval }: LimitSets, set: LimitSet, stream: string) {
    const { draft } = this;
    if (!this.#mayChange()) {
      return html`<section class="card" aria-label="Change them">
        <h2>Change them</h2>
        <p>An engineer can; ${this.plant.person.name} is here as ${this.plant.person.role}.</p>
        <p>${this.#save(set, stream)}</p>
      </section>`;
    }
    return html`<section class="card" aria-label="Change them">
      <h2>Change them</h2>
      <p>
        Save the version in force, change it in an editor, and read it back: what differs is shown before anything happens.
        ${approval ? "Another person must approve it here." : nothing}
      </p>
      <form @submit=${(event: SubmitEvent) => this.#send(event, stream)}>
        ${this.#save(set, stream)}
        <label>Read a changed file <input type="file" accept=".json,application/json" @change=${(event: Event) => this.#read(event, stream)} /></label>
        ${
          draft && draft.differences.length > 0
            ? html`<label>Reason <input name="reason" required maxlength="2000" /></label>
                <button>${approval ? "Propose it" : "Put it in force"}</button>`
            : nothing
        }
      </form>
      ${
        draft
          ? draft.differences.length > 0
            ? html`<p>${draft.file} differs from the limits in force in:</p>
                ${changeList(draft.differences)}`
            : html`<p>${draft.file} says the same as the limits in force.</p>`
          : nothing
      }
    </section>`;
  }

  #save({ version }: LimitSet, stream: string) {
    return html`<a class="button" href=${`/api/v1/streams/${stream}/limit-sets/${version}`} download=${`${stream}.limits-${version}.json`} target="_blank">Save version ${version} as a file</a>`;
  }

  #versions({ versions }: LimitSets, stream: string) {
    return html`<section class="card" aria-label="Versions">
      <h2>Versions</h2>
      ${versions.map(
        (version, i) => html`<div class="entry">
          <p><b>${version.version}</b> ${this.#when(version.time)}, ${by(version)}: ${version.reason}</p>
          ${this.#evidence(version.evidence)}
          ${changeList(version.differences)}
          ${
            i > 0 && this.#mayChange() && version.model === versions[0].model
              ? html`<form @submit=${(event: SubmitEvent) => this.#rollBack(event, stream, version.version)}>
                  <label>Reason to go back to version ${version.version} <input name="reason" required maxlength="2000" /></label>
                  <button>Go back to version ${version.version}</button>
                </form>`
              : nothing
          }
        </div>`,
      )}
    </section>`;
  }

  /** What a rehearsal said for it. */
  #evidence(evidence: RehearsalEvidence | undefined) {
    if (!evidence) return nothing;
    const { from, to, readings, version, inForce, proposed } = evidence;
    const both = (before: number, after: number) => `${figure(before, 3)} → ${figure(after, 3)}`;
    return html`<p>
      Rehearsed on ${grouped(readings)} readings, ${this.#when(from)} to ${this.#when(to)}, against version ${version}: calls per day
      ${both(inForce.perDay, proposed.perDay)}; labelled troubles missed ${both(inForce.missed, proposed.missed)} of
      ${inForce.found + inForce.missed}; calls without a labelled cause ${both(inForce.causeless, proposed.causeless)}.
    </p>`;
  }

  #when(at: number) {
    return html`<span class="whole" title=${this.time.full(at)}>${this.time.brief(at, this.feed.now())} ${this.time.zoneName(at)}</span>`;
  }

  #choose(event: Event): void {
    this.draft = undefined;
    this.said = undefined;
    this.failed = undefined;
    const route: Route = { view: "limits", stream: (event.target as HTMLSelectElement).value };
    this.dispatchEvent(new CustomEvent("go", { detail: { route, replace: false }, bubbles: true, composed: true }));
  }

  async #read(event: Event, stream: string): Promise<void> {
    const [file] = (event.target as HTMLInputElement).files ?? [];
    this.draft = undefined;
    this.said = undefined;
    this.failed = undefined;
    if (!file) return;
    try {
      const limitSet = JSON.parse(await file.text()) as LimitSet;
      const { differences } = await api.limitDifferences(stream, limitSet);
      this.draft = { file: file.name, limitSet, differences };
    } catch (error) {
      this.failed = `${file.name} was not taken. ${(error as Error).message}`;
    }
  }

  #send(event: SubmitEvent, stream: string): void {
    const reason = reasonOf(event);
    const { draft } = this;
    if (draft) void this.#do(() => api.changeLimits(stream, draft.limitSet, reason));
  }

  #rollBack(event: SubmitEvent, stream: string, version: number): void {
    const reason = reasonOf(event);
    void this.#do(() => api.rollBackLimits(stream, version, reason));
  }

  #withdraw(event: SubmitEvent, stream: string, proposal: number): void {
    const reason = reasonOf(event);
    void this.#do(() => api.withdrawLimits(stream, proposal, reason));
  }

  async #do(ask: () => ReturnType<typeof api.approveLimits>): Promise<void> {
    this.said = undefined;
    this.failed = undefined;
    try {
      const { version, proposal } = await ask();
      this.said =
        version !== undefined
          ? `Version ${version} is in force from the next reading on.`
          : proposal !== undefined
            ? `Proposal ${proposal} waits for another person.`
            : "The proposal is withdrawn.";
      this.draft = undefined;
      this.#loaded.refresh();
    } catch (error) {
      this.failed = (error as Error).message;
    }
  }

  /** Somebody else may have changed them. */
  #heard(): void {
    const newest = this.feed.events.at(-1)?.cursor ?? -1;
    if (newest === this.#cursor) return;
    this.#cursor = newest;
    this.#loaded.refresh();
  }
}

/** core/limits names the methods; a person reads this. */
const methodWords: Record<string, string> = {
  f: "F distribution, for new readings",
  beta: "beta distribution, for calibration samples",
  "chi-squared": "χ² distribution, for many samples",
  largest: "the largest within the calibration",
  "box-moments": "Box, g·χ²(h) by moments",
  box: "Box, g·χ²(h) by eigenvalues",
  "jackson-mudholkar": "Jackson and Mudholkar",
  empirical: "percentile of the residuals",
  fixed: "a number set by a person",
  learnt: "learnt from a reference period",
};
const mayChange = new Set(["engineer", "administrator"]);

const untrustedWords = { hold: "holds it", evaluate: "counts", suppress: "clears it" };

function by({ author, approver }: { author: string; approver?: string }): string {
  return approver === undefined ? author : `${author}, approved by ${approver}`;
}

function changeList(differences: Differences) {
  if (differences.length === 0) return nothing;
  return html`<ul class="changes">
    ${differences.map(
      ({ what, before, after }) =>
        html`<li>${named(what)}: ${before === undefined ? "new" : before} → <b>${after === undefined ? "gone" : after}</b></li>`,
    )}
  </ul>`;
}

function reasonOf(event: SubmitEvent): string {
  event.preventDefault();
  return String(new FormData(event.target as HTMLFormElement).get("reason"));
}

customElements.define("mill-limits-view", LimitsView);
