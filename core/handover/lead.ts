import type { Excursion, Lead, OpenAlarm, SetAsideAlarm, ShiftRecord } from "../messages/index.ts";
import { excursionWords } from "../shift-page/index.ts";
import { counted, duration, type PlantTime } from "../words/index.ts";

type Told = Omit<ShiftRecord, "lead">;

/**
 * The beginning of a shift's record: what the next shift must know, most important first. What is open and asks for somebody comes before what
 * was, and where there is neither, that is said.
 */
export function leadOf(record: Told, time: PlantTime): Lead[] {
  const name = (stream: string | null) => record.streams.find((each) => each.stream === stream)?.name ?? stream;
  const say = (weight: Lead["weight"], stream: string | null, says: string): Lead => ({
    weight,
    stream,
    says: stream === null ? says : `${name(stream)}: ${says}`,
  });
  const when = (at: number) => time.brief(at, record.to);
  const act = [
    ...record.open.alarms.map((alarm) => say("act", alarm.stream, alarmSays(alarm, when))),
    ...record.streams.flatMap(({ stream, account }) =>
      silentSays(account.gaps, record.to, when).map((says) => say("act", stream, says)),
    ),
    ...unalarmed(record.open).map((each) => say("act", each.stream, `${excursionWords(each, when)}.`)),
    ...record.actions
      .filter(({ closed, due }) => closed === null && due !== undefined && due <= record.to)
      .map(({ says, owner, due }) => say("act", null, `Overdue since ${when(due!)}: ${says} (${owner}).`)),
    ...uncheckedSays(record).map((says) => say("act", null, says)),
  ];
  const know = [
    ...record.open.setAside.map((each) => say("know", each.stream, setAsideSays(each, when))),
    ...record.laboratory.filter(({ disagrees }) => disagrees).map(({ stream, says }) => say("know", stream, says)),
    ...record.changes.map(({ at, stream, says, by }) =>
      say("know", stream, `${when(at)} ${says}${by ? ` (${by})` : ""}`),
    ),
    ...countsOf(record, when).map((says) => say("know", null, says)),
    ...record.clockSteps.map(({ at, backMs }) =>
      say(
        "know",
        null,
        `The server's clock was set back by ${duration(backMs)} to ${when(at)}: times before and after overlap.`,
      ),
    ),
  ];
  return act.length + know.length > 0 ? [...act, ...know] : [say("fine", null, quietSays(record))];
}

function alarmSays(
  { title, priority, state, since, response, acknowledgedBy }: OpenAlarm,
  when: (at: number) => string,
): string {
  const seen = acknowledgedBy === undefined ? state : `acknowledged by ${acknowledgedBy}`;
  return `${title} (${priority}), since ${when(since)}, ${seen}. ${response}`;
}

function setAsideSays(
  { title, outOfService, suppressed, shelved, active }: SetAsideAlarm,
  when: (at: number) => string,
): string {
  const holds = active ? " Its condition holds." : "";
  if (outOfService) {
    const { by, at, until, reason } = outOfService;
    return `${title} is out of service since ${when(at)}, ${until === undefined ? "until somebody returns it" : `until ${when(until)}`}: ${reason} (${by}).${holds}`;
  }
  if (suppressed)
    return `${title} is suppressed by design since ${when(suppressed.since)}: the process is ${suppressed.state}.${holds}`;
  if (shelved) return `${title} is shelved until ${when(shelved.until)}: ${shelved.reason} (${shelved.by}).${holds}`;
  return `${title} is set aside.${holds}`;
}

/** The last gap reaches to the end: there is no reading to judge by. */
function silentSays(gaps: readonly [number, number][], to: number, when: (at: number) => string): string[] {
  const last = gaps.at(-1);
  return last && last[1] >= to ? [`no data since ${when(last[0])}. Watch the process by other means.`] : [];
}

/** Open excursions for which no alarm stands: those with one are told by it. */
function unalarmed({ excursions, alarms }: ShiftRecord["open"]): Excursion[] {
  return excursions.filter(
    ({ stream, alarms: own = [] }) =>
      !own.some(({ key }) => alarms.some((alarm) => alarm.stream === stream && alarm.key === key)),
  );
}

function uncheckedSays({ checks }: Told): string[] {
  const open = checks.filter(({ entry }) => entry?.kind !== "check" || entry.outcome !== "done");
  return open.length === 0
    ? []
    : [`${counted(open.length, "required check")} not done: ${open.map(({ says }) => says).join("; ")}.`];
}

/** What came and went: in numbers, since the lists follow. */
function countsOf(
  { alarms, excursions, open, streams, refused, service, actions }: Told,
  when: (at: number) => string,
): string[] {
  const ended = excursions.length - open.excursions.length;
  const gaps = streams.flatMap(({ account }) => account.gaps);
  const waiting = actions.filter(({ closed }) => closed === null);
  const restarts = service.filter(({ kind }) => kind === "service started");
  const lost = service.filter(({ kind }) => kind === "broker lost");
  const messages = refused.reduce((sum, { count }) => sum + count, 0);
  return [
    alarms.annunciations > 0
      ? `${counted(alarms.annunciations, "alarm")}, the highest of priority ${alarms.highest}; ${alarms.unacknowledged} never acknowledged, ${alarms.standing} standing${alarms.history > 0 ? `; ${alarms.history} came in with recorded history, which calls nobody` : ""}.`
      : "",
    ...alarms.floods.map(
      ({ start, annunciations, peak }) =>
        `Alarm flood from ${when(start)}: ${annunciations} alarms, ${peak} of them within 10 min.`,
    ),
    ...alarms.list
      .filter(({ chattering }) => chattering)
      .map(({ title, count }) => `${title} chattered: ${count} times.`),
    ended > 0 ? `${counted(ended, "excursion")} came and went.` : "",
    gaps.length > 0
      ? `${counted(gaps.length, "gap")} in the data, ${duration(gaps.reduce((sum, [a, b]) => sum + b - a, 0))} in all.`
      : "",
    messages > 0 ? `${counted(messages, "message")} refused.` : "",
    restarts.length > 0 ? `The service was started ${restarts.map(({ at }) => `at ${when(at)}`).join(", ")}.` : "",
    lost.length > 0 ? `The broker was lost ${lost.map(({ at }) => `at ${when(at)}`).join(", ")}.` : "",
    waiting.length > 0 ? `${counted(waiting.length, "action")} open for the next shift.` : "",
  ].filter((says) => says !== "");
}

function quietSays({ streams }: Told): string {
  const inside = streams.every(({ account }) => account.ms.inside > 0);
  return `A quiet shift. Nothing is open; no alarms, no excursions, no changes, no gaps${inside ? "" : ", and a stream without trusted numbers"}.`;
}
