import type { Performance, RecordedEvent } from "../../messages/index.ts";
import { type Annunciation, alarmHistory } from "./annunciation.ts";
import { floodsIn, mostWithin } from "./floods.ts";
import { byAlarm, chatteringOf, fleetingOf, nameOf } from "./nuisance.ts";
import { figureOf, recommendations, recommendedShares, recommendedSharesSource } from "./recommended.ts";
import { mostStaleOnADay, staleOf, standingAt } from "./standing.ts";

const tenMinutes = 10 * 60_000;
const hour = 3_600_000;
const day = 24 * hour;
/** The standards judge from at least 30 days. */
const enoughDays = 30;

/**
 * How well the alarm system itself does: figures over the annunciations of `from` ≤ time < `to`, each beside what is recommended. Pure.
 *
 * @param events alarm events in the order of the record. Those before `from` are not counted, but tell what stood there: give some days more.
 */
export function performanceOf(
  events: readonly RecordedEvent[],
  { from, to }: { from: number; to: number },
): Performance {
  const { annunciations: all, stretches, withheld } = alarmHistory(events);
  const within = (at: number) => from <= at && at < to;
  const annunciations = all.filter(({ at }) => within(at));
  const times = annunciations.map(({ at }) => at);
  const n = annunciations.length;
  const span = to - from;
  const floods = floodsIn(times, to);
  const tens = fixedPeriods(times, from, to, tenMinutes);
  const hours = fixedPeriods(times, from, to, hour);
  const frequent = mostFrequent(annunciations);
  const chattering = chatteringOf(annunciations);
  const fleeting = fleetingOf(annunciations);
  // Of ten alarms or fewer the ten most frequent are all there are, which says nothing.
  const topTen = frequent.length > 10 ? frequent.slice(0, 10).reduce((sum, { count }) => sum + count, 0) : null;
  return {
    from,
    to,
    days: span / day,
    enough: span >= enoughDays * day,
    annunciations: n,
    withheld: withheld.filter(within).length,
    figures: [
      figureOf(recommendations.perTenMinutes, n / (span / tenMinutes)),
      figureOf(recommendations.perHour, n / (span / hour)),
      figureOf(recommendations.perDay, n / (span / day)),
      figureOf(recommendations.badTenMinutes, percentAbove(tens.count, 10)),
      figureOf(recommendations.badHours, percentAbove(hours.count, 30)),
      figureOf(recommendations.mostInTenMinutes, mostWithin(times, tenMinutes)),
      figureOf(recommendations.inFlood, percent(floodTime(floods, to), span)),
      figureOf(recommendations.topTen, topTen === null ? null : percent(topTen, n)),
      figureOf(recommendations.chattering, chattering.length),
      figureOf(recommendations.fleeting, fleeting.length),
      figureOf(recommendations.stale, mostStaleOnADay(stretches, from, to)),
    ],
    byPriority: (["high", "medium", "low"] as const).map((priority) => {
      const count = annunciations.filter((each) => each.priority === priority).length;
      return { priority, count, percent: percent(count, n), recommended: recommendedShares[priority] };
    }),
    byPrioritySource: recommendedSharesSource,
    floods,
    mostFrequent: frequent,
    chattering,
    fleeting,
    stale: staleOf(stretches, from, to),
    standing: standingAt(stretches, to),
    acknowledging: acknowledging(annunciations),
    hours,
  };
}

/** Counts in the whole periods of the clock that lie in `from`–`to`; the first and the last part are left out. */
function fixedPeriods(times: readonly number[], from: number, to: number, length: number): Performance["hours"] {
  const first = Math.ceil(from / length);
  const count = new Array<number>(Math.max(0, Math.floor(to / length) - first)).fill(0);
  for (const time of times) {
    const i = Math.floor(time / length) - first;
    if (i >= 0 && i < count.length) count[i]++;
  }
  return { at: count.map((_, i) => (first + i) * length), count };
}

function percentAbove(counts: readonly number[], most: number): number | null {
  return percent(counts.filter((count) => count > most).length, counts.length);
}

function percent(part: number, whole: number): number | null {
  return whole > 0 ? (100 * part) / whole : null;
}

function floodTime(floods: Performance["floods"], to: number): number {
  return floods.reduce((sum, { start, end }) => sum + (end ?? to) - start, 0);
}

function mostFrequent(annunciations: readonly Annunciation[]): Performance["mostFrequent"] {
  return byAlarm(annunciations)
    .map((ofOne) => {
      const count = ofOne.length;
      return { ...nameOf(ofOne[0]), count, percent: (100 * count) / annunciations.length };
    })
    .sort((a, b) => b.count - a.count);
}

/** How long people took to say "seen". An alarm that was annunciated again before that counts as never acknowledged the first time. */
function acknowledging(annunciations: readonly Annunciation[]): Performance["acknowledging"] {
  const waits = annunciations
    .flatMap(({ at, acknowledgedAt }) => (acknowledgedAt === undefined ? [] : [Math.max(0, acknowledgedAt - at)]))
    .sort((a, b) => a - b);
  const rank = (share: number) => (waits.length === 0 ? null : waits[Math.ceil(share * waits.length) - 1]);
  return {
    acknowledged: waits.length,
    never: annunciations.length - waits.length,
    medianMs: rank(0.5),
    ninthDecileMs: rank(0.9),
  };
}
