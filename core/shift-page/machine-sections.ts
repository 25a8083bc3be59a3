import type { AlarmLine, EventLine, ShiftRecord } from "../messages/index.ts";
import { counted, duration, grouped } from "../words/index.ts";
import { excursionWords } from "./excursion-words.ts";
import { type Markup, markup } from "./markup.ts";
import type { Pen } from "./record-page.ts";

interface Section {
  title: string;
  /** the same in the line that names what there was none of */
  none: string;
  count: (record: ShiftRecord) => number;
  body: (record: ShiftRecord, pen: Pen) => Markup;
}

const gapCount = ({ streams }: ShiftRecord) => streams.reduce((sum, { account }) => sum + account.gaps.length, 0);

/** What the machine filled in beyond the streams, in the order in which it matters. */
const sections: readonly Section[] = [
  {
    title: "Set aside: shelved, suppressed, out of service",
    none: "alarms set aside",
    count: ({ open }) => open.setAside.length,
    body: ({ open }, { name, when }) =>
      list(
        open.setAside.map(({ stream, title, state, shelved, suppressed, outOfService, active }) => {
          const since = outOfService?.at ?? suppressed?.since ?? shelved?.at;
          const until = outOfService?.until ?? suppressed?.until ?? shelved?.until;
          const why =
            outOfService?.reason ?? shelved?.reason ?? (suppressed ? `the process is ${suppressed.state}` : "");
          const by = outOfService?.by ?? shelved?.by;
          return markup`<b>${name(stream)}</b>: ${title}, ${state}${since === undefined ? "" : ` since ${when(since)}`}, ${until === undefined ? "no end set" : `until ${when(until)}`}: ${why}${by === undefined ? "" : ` (${by})`}${active ? "; its condition holds" : ""}`;
        }),
      ),
  },
  {
    title: "Excursions",
    none: "excursions",
    count: ({ excursions }) => excursions.length,
    body: ({ excursions }, { name, when }) =>
      list(
        excursions.map((each) => {
          const notes = (each.notes ?? []).map(({ says, by }) => `${says} (${by})`).join("; ");
          const label = each.label ? ` (${each.label.by})` : "";
          return markup`<b>${name(each.stream)}</b>: ${excursionWords(each, when)}${label}. <span class="quiet">${each.says}</span>${notes ? ` Notes: ${notes}.` : ""}`;
        }),
      ),
  },
  {
    title: "Alarms",
    none: "alarms",
    count: ({ alarms }) => alarms.annunciations + alarms.withheld,
    body: alarmTable,
  },
  {
    title: "Changes of limits and models",
    none: "changes of limits or models",
    count: ({ changes }) => changes.length,
    body: ({ changes }, pen) => eventList(changes, pen),
  },
  {
    title: "Laboratory",
    none: "laboratory results",
    count: ({ laboratory }) => laboratory.length,
    body: ({ laboratory }, { name, when }) =>
      list(
        laboratory.map(
          ({ stream, at, says, disagrees }) =>
            markup`${when(at)} <b>${name(stream)}</b>: ${says}${disagrees ? markup` <b>Disagrees.</b>` : ""}`,
        ),
      ),
  },
  {
    title: "Process states",
    none: "changes of the process state",
    count: ({ process }) => process.length,
    body: ({ process }, pen) => eventList(process, pen),
  },
  {
    title: "Gaps in the data",
    none: "gaps in the data",
    count: gapCount,
    body: ({ streams }, { when }) =>
      list(
        streams
          .filter(({ account }) => account.gaps.length > 0)
          .map(
            ({ name, account }) =>
              markup`<b>${name}</b>: ${account.gaps.map(([since, until]) => `${when(since)} to ${when(until)} (${duration(until - since)})`).join(", ")}`,
          ),
      ),
  },
  {
    title: "Refused messages",
    none: "refused messages",
    count: ({ refused }) => refused.length,
    body: ({ refused }, { name, when }) =>
      list(
        refused.map(
          ({ stream, reason, says, count, first, last }) =>
            markup`<b>${stream === null ? "no stream of ours" : name(stream)}</b>: ${reason}, ${counted(count, "time")}, ${when(first)} to ${when(last)}. <span class="quiet">${says}</span>`,
        ),
      ),
  },
  {
    title: "The service itself",
    none: "events of the service",
    count: ({ service, clockSteps }) => service.length + clockSteps.length,
    body: ({ service, clockSteps }, pen) =>
      markup`${eventList(service, pen)}${list(clockSteps.map(({ at, backMs }) => `${pen.when(at)} the server's clock was set back by ${duration(backMs)}`))}`,
  },
];

export function machineSections(record: ShiftRecord, pen: Pen): Markup[] {
  return sections
    .filter(({ count }) => count(record) > 0)
    .map(({ title, body }) => markup`<section><h2>${title}</h2>${body(record, pen)}</section>`);
}

/** A quiet shift is short: all that there was none of, in one line. */
export function emptySections(record: ShiftRecord): Markup {
  const none = [
    ...sections.filter(({ count }) => count(record) === 0).map((section) => section.none),
    ...(record.notes.length === 0 ? ["notes"] : []),
    ...(record.actions.length === 0 ? ["actions"] : []),
    ...(record.checks.length === 0 ? ["required checks"] : []),
  ];
  if (none.length === 0) return markup``;
  return markup`<p class="quiet">None in this shift: ${none.join(", ")}.</p>`;
}

function list(items: readonly (Markup | string)[]): Markup {
  return items.length === 0 ? markup`` : markup`<ul>${items.map((item) => markup`<li>${item}</li>`)}</ul>`;
}

/** By their times; the order of the record is another where history was brought in. */
function eventList(events: readonly EventLine[], { name, when }: Pen): Markup {
  const inTime = events.toSorted((a, b) => a.at - b.at);
  return list(
    inTime.map(({ at, stream, says, by }) => {
      const where = stream === null ? "" : markup`<b>${name(stream)}</b>: `;
      return markup`<span class="whole">${when(at)}</span> ${where}${says}${by === undefined ? "" : markup` <span class="by">(${by})</span>`}`;
    }),
  );
}

function alarmTable({ alarms }: ShiftRecord, { name, when }: Pen): Markup {
  const { annunciations, withheld, history, unacknowledged, standing, mostInTenMinutes, list: lines } = alarms;
  const row = ({
    stream,
    title,
    priority,
    count,
    first,
    last,
    by,
    unacknowledged: unseen,
    ...line
  }: AlarmLine) => markup`<tr>
    <td><b>${name(stream)}</b>: ${title}</td><td>${priority}</td><td class="number">${grouped(count)}</td>
    <td class="whole">${when(first)}${count > 1 ? ` to ${when(last)}` : ""}</td>
    <td>${[unseen > 0 ? `${unseen} never acknowledged` : "", by.length > 0 ? `acknowledged by ${by.join(", ")}` : "", line.standing ? "standing" : "", line.chattering ? "chattering" : ""].filter(Boolean).join("; ")}</td>
    <td class="quiet">${sentence(line.cause)} ${line.response}</td></tr>`;
  return markup`<p>${counted(annunciations, "alarm")}: ${unacknowledged} never acknowledged, ${standing} standing at the end, at most ${mostInTenMinutes} in 10 min.
    ${withheld > 0 ? `${withheld} more came while set aside.` : ""} ${history > 0 ? `${grouped(history)} came in with recorded history: nobody was called.` : ""}</p>
    ${lines.length === 0 ? "" : markup`<div class="scrolls" tabindex="0" role="region" aria-label="Alarms of the shift"><table><thead><tr><th scope="col">Alarm</th><th scope="col">Priority</th><th scope="col" class="number">Times</th><th scope="col">When</th><th scope="col">Dealt with</th><th scope="col">Cause and response</th></tr></thead><tbody>${lines.map(row)}</tbody></table></div>`}`;
}

function sentence(words: string): string {
  return words === "" || /[.!?]$/.test(words) ? words : `${words}.`;
}
