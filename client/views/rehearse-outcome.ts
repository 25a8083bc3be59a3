import { html, nothing } from "lit";
import type { Outcome, RehearsalResult } from "../../core/rehearsal/index.ts";
import { href } from "../app/route.ts";
import { duration } from "../words/duration.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { figure, percent } from "../words/quantity.ts";

/** What both limit sets came to, figure by figure, with the difference. */
export function outcomeTable({ inForce, proposed, version }: RehearsalResult) {
  const row = (what: string, of: (outcome: Outcome) => number, shown: (value: number) => string) => {
    const before = of(inForce);
    const after = proposed && of(proposed);
    return html`<tr>
      <th scope="row">${what}</th>
      <td class="number">${shown(before)}</td>
      <td class="number">${after === undefined ? "—" : shown(after)}</td>
      <td class="number">${after === undefined ? "—" : after === before ? "same" : signed(after - before, shown)}</td>
    </tr>`;
  };
  const count = (value: number) => figure(value, 4);
  return html`<table>
    <caption>Over ${figure(inForce.days, 3)} days with data.</caption>
    <thead>
      <tr>
        <th scope="col">What people would have met</th>
        <th scope="col" class="number">In force (version ${version})</th>
        <th scope="col" class="number">Proposed</th>
        <th scope="col" class="number">Difference</th>
      </tr>
    </thead>
    <tbody>
      ${row(
        "Calls per day",
        ({ perDay }) => perDay,
        (v) => figure(v, 3),
      )}
      ${row("Labelled troubles found", ({ found }) => found, count)} ${row("Labelled troubles missed", ({ missed }) => missed, count)}
      ${row("Calls without a labelled cause", ({ causeless }) => causeless.length, count)}
      ${row("Longest quiet time", ({ longestQuietMs }) => longestQuietMs, duration)}
      ${row("Chattering calls", ({ alarms }) => alarms.reduce((sum, { chattering }) => sum + chattering, 0), count)}
      ${row("Readings inside", ({ readings }) => (readings.usable ? readings.inside / readings.usable : 0), percent)}
    </tbody>
  </table>`;
}

/** Alarm by alarm. */
export function alarmsTable({ inForce, proposed }: RehearsalResult) {
  const keys = [...new Set([...inForce.alarms, ...(proposed?.alarms ?? [])].map(({ key }) => key))];
  const cell = (outcome: Outcome | undefined, key: string) => {
    const alarm = outcome?.alarms.find((each) => each.key === key);
    return alarm
      ? html`<td class="number">${figure(alarm.perDay, 3)}</td><td class="number">${percent(alarm.inAlarm)}</td>`
      : html`<td class="number">—</td><td class="number">—</td>`;
  };
  const titleOf = (key: string) =>
    [...inForce.alarms, ...(proposed?.alarms ?? [])].find((each) => each.key === key)?.title ?? key;
  return html`<table>
    <thead>
      <tr>
        <th scope="col">Alarm</th>
        <th scope="col" class="number">Calls per day, in force</th>
        <th scope="col" class="number">time in alarm</th>
        <th scope="col" class="number">Calls per day, proposed</th>
        <th scope="col" class="number">time in alarm</th>
      </tr>
    </thead>
    <tbody>
      ${keys.map((key) => html`<tr><th scope="row">${titleOf(key)}</th>${cell(inForce, key)}${cell(proposed, key)}</tr>`)}
    </tbody>
  </table>`;
}

/** Each labelled trouble: found by what and how late, or missed. */
export function troublesTable({ inForce, proposed, truth, stretch }: RehearsalResult, time: PlantTime) {
  if (truth.length === 0) {
    return html`<p>
      No excursion in this stretch is labelled as a process change or an analyzer fault, so nothing can be called found or missed. Label what you
      know in <a href=${href({ view: "excursions", stream: stretch.stream })}>Excursions</a>.
    </p>`;
  }
  const words = (outcome: Outcome | undefined, id: string) => {
    const event = outcome?.events.find((each) => each.id === id);
    if (!event) return "—";
    if (event.foundBy === undefined) return html`<b>missed</b>`;
    const late = event.lateMs ?? 0;
    return `${event.foundBy}, ${late < 0 ? `${duration(-late)} before` : `after ${duration(late)}`}`;
  };
  return html`<table>
    <thead>
      <tr>
        <th scope="col">Labelled trouble</th>
        <th scope="col">Began</th>
        <th scope="col">In force</th>
        <th scope="col">Proposed</th>
      </tr>
    </thead>
    <tbody>
      ${truth.map(
        ({ id, kind, label, from }) => html`<tr>
          <th scope="row">${label}: ${kind}</th>
          <td class="whole"><a href=${href({ view: "reading", stream: stretch.stream, at: from })}>${time.brief(from, Date.now())} ${time.zoneName(from)}</a></td>
          <td>${words(inForce, id)}</td>
          <td>${proposed ? words(proposed, id) : nothing}</td>
        </tr>`,
      )}
    </tbody>
  </table>`;
}

function signed(difference: number, shown: (value: number) => string): string {
  return `${difference > 0 ? "+" : "−"}${shown(Math.abs(difference))}`;
}
