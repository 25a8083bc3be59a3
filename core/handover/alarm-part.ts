import { type Annunciation, alarmHistory, byAlarm, chatteringOf, floodsIn, mostWithin } from "../alarms/index.ts";
import type { AlarmLine, AlarmPart, OpenAlarm, RecordedEvent } from "../messages/index.ts";
import { priorityOrder } from "./open-at.ts";

const tenMinutes = 10 * 60_000;

/**
 * The alarms of a shift: how many, how grave, and what was not dealt with.
 *
 * @param events of alarms in the order of the record, with some days before `from`, so that what stood there is known
 */
export function alarmPart(events: readonly RecordedEvent[], { from, to }: { from: number; to: number }): AlarmPart {
  const upTo = events.filter(({ at }) => at < to);
  const { annunciations: all, stretches, withheld } = alarmHistory(upTo);
  const within = (at: number) => from <= at && at < to;
  const annunciations = all.filter(({ at }) => within(at));
  const times = annunciations.map(({ at }) => at);
  const standing = new Set(stretches.filter(({ until }) => until === undefined).map(idOf));
  const chattering = new Set(chatteringOf(annunciations).map(idOf));
  const details = detailsIn(upTo.filter(({ at }) => within(at)));
  const list = byAlarm(annunciations).map((ofOne): AlarmLine => {
    const [{ stream, key, title, priority }] = ofOne;
    const id = idOf(ofOne[0]);
    const { by = new Set<string>(), alarm } = details.get(id) ?? {};
    return {
      ...{ stream, key, title, priority },
      count: ofOne.length,
      first: ofOne[0].at,
      last: ofOne[ofOne.length - 1].at,
      unacknowledged: ofOne.filter(isUnanswered).length,
      by: [...by],
      standing: standing.has(id),
      chattering: chattering.has(id),
      cause: alarm?.cause ?? "",
      response: alarm?.response ?? "",
    };
  });
  list.sort((a, b) => rank(a) - rank(b) || b.count - a.count || a.first - b.first);
  return {
    annunciations: annunciations.length,
    history: upTo.filter((event) => event.history && within(event.at) && isCall(event)).length,
    withheld: withheld.filter(within).length,
    highest: list[0]?.priority ?? null,
    unacknowledged: annunciations.filter(isUnanswered).length,
    standing: list.filter((line) => line.standing).length,
    mostInTenMinutes: mostWithin(times, tenMinutes),
    floods: floodsIn(times, to),
    list,
  };
}

const calls = new Set(["alarm raised", "alarm raised again", "alarm annunciated anew"]);
function isCall({ kind, alarm }: RecordedEvent): boolean {
  return calls.has(kind) && alarm !== undefined && alarm.priority !== "record only";
}

function isUnanswered({ acknowledgedAt }: Annunciation): boolean {
  return acknowledgedAt === undefined;
}

/** By alarm: who acknowledged it, and its cause and response as they were last. */
function detailsIn(events: readonly RecordedEvent[]) {
  const found = new Map<string, { by: Set<string>; alarm?: OpenAlarm }>();
  for (const { stream, kind, alarm, by } of events) {
    if (!alarm || stream === null) continue;
    const id = idOf({ stream, key: alarm.key });
    const known = found.get(id) ?? { by: new Set() };
    if (kind === "alarm acknowledged" && by !== undefined) known.by.add(by);
    found.set(id, { ...known, alarm });
  }
  return found;
}

function idOf({ stream, key }: { stream: string; key: string }): string {
  return `${stream}/${key}`;
}

function rank({ priority }: { priority: string }): number {
  return priorityOrder.indexOf(priority);
}
