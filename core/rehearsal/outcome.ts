import { type Annunciation, chatteringOf, fleetingOf } from "../alarms/index.ts";
import type { AlarmRule } from "../limit-set/index.ts";
import type { Excursion, Priority } from "../messages/index.ts";
import type { Coverage } from "./coverage.ts";
import type { Rehearsed } from "./rehearse.ts";
import type { Activation } from "./replay-alarm.ts";
import type { Span } from "./stretch.ts";

const day = 86_400_000;
/** An alarm of a trouble may come a little after it has ended: the delays are still counting. */
const afterMs = 120_000;

/** What a person called by its name in the record. Trouble must be found; what is false must stay quiet. */
export interface LabelledEvent extends Span {
  id: string;
  kind: string;
  label: "process change" | "analyzer fault";
}

export interface AlarmOutcome {
  key: string;
  title: string;
  priority: Priority;
  /** how often somebody would have been called */
  annunciations: number;
  perDay: number;
  /** share of the time with data in which its condition held, 0–1 */
  inAlarm: number;
  chattering: number;
  fleeting: number;
}

export interface EventOutcome extends LabelledEvent {
  /** the alarm that called first; absent: missed */
  foundBy?: string;
  /** from the beginning of the event to the call, ms; negative: before a statistic was beyond its limit at all */
  lateMs?: number;
}

/** What a limit set would have meant to the people who live with it. */
export interface Outcome {
  /** time with data, in days of 24 h */
  days: number;
  annunciations: number;
  perDay: number;
  alarms: AlarmOutcome[];
  events: EventOutcome[];
  found: number;
  missed: number;
  /** whenever somebody would have been called, in the order of time */
  calls: Activation[];
  /** those of them that no labelled trouble explains, in the order of time; those for the record only call nobody */
  causeless: Activation[];
  /** the longest time with data without a call, ms */
  longestQuietMs: number;
  readings: Rehearsed["readings"];
}

/** The troubles among recorded excursions. "cleaning", "false" and "unknown" explain no alarm and are not to be found. */
export function labelledEvents(excursions: readonly Excursion[], { from, to }: Span): LabelledEvent[] {
  return excursions
    .flatMap(({ id, kind, start, end, label }): LabelledEvent[] => {
      const is = label?.is;
      if (is !== "process change" && is !== "analyzer fault") return [];
      return start < to && (end ?? to) >= from ? [{ id, kind, label: is, from: start, to: end ?? to }] : [];
    })
    .sort((a, b) => a.from - b.from);
}

/**
 * Counts what a rehearsal came to. Silent and frozen analyzers have no excursion to be labelled, so an alarm on them counts as one with a
 * cause: nobody would wish it away. Pure.
 */
export function outcomeOf({ alarms, covered, readings }: Rehearsed, truth: readonly LabelledEvent[]): Outcome {
  const calls = alarms
    .flatMap(({ rule, activations }) => (rule.priority === "record only" ? [] : activations))
    .filter(({ annunciatedAt }) => annunciatedAt !== undefined)
    .sort((a, b) => a.annunciatedAt! - b.annunciatedAt!);
  const needCause = new Set(alarms.filter(({ rule }) => needsCause(rule)).map(({ rule }) => rule.key));
  const days = covered.totalMs / day;
  const events = truth.map((event) => found(event, calls));
  const missed = events.filter(({ foundBy }) => foundBy === undefined).length;
  return {
    days,
    annunciations: calls.length,
    perDay: perDay(calls.length, days),
    alarms: alarms.map(({ outcome }) => outcome),
    events,
    found: events.length - missed,
    missed,
    calls,
    causeless: calls.filter((call) => needCause.has(call.key) && !truth.some((event) => meets(call, event))),
    longestQuietMs: longestQuiet(covered, calls),
    readings,
  };
}

function perDay(count: number, days: number): number {
  return days > 0 ? count / days : 0;
}

export function alarmOutcome(
  stream: string,
  { key, title, priority }: AlarmRule,
  activations: readonly Activation[],
  { end, totalMs }: Coverage,
): AlarmOutcome {
  const called: Annunciation[] = activations.flatMap(({ annunciatedAt, clearedAt }) => {
    if (annunciatedAt === undefined || priority === "record only") return [];
    const cleared = clearedAt === undefined ? {} : { clearedAt };
    return [{ stream, key, title, priority, at: annunciatedAt, ...cleared }];
  });
  const heldMs = activations.reduce((sum, { raisedAt, clearedAt }) => sum + (clearedAt ?? end) - raisedAt, 0);
  const all = (counts: readonly { annunciations: number }[]) => counts[0]?.annunciations ?? 0;
  return {
    ...{ key, title, priority },
    annunciations: called.length,
    perDay: perDay(called.length, totalMs / day),
    inAlarm: totalMs > 0 ? Math.min(1, heldMs / totalMs) : 0,
    chattering: all(chatteringOf(called)),
    fleeting: all(fleetingOf(called)),
  };
}

function meets({ raisedAt, since, clearedAt }: Activation, { from, to }: Span): boolean {
  return Math.min(since, raisedAt) <= to + afterMs && (clearedAt ?? Number.POSITIVE_INFINITY) >= from;
}

function found(event: LabelledEvent, calls: readonly Activation[]): EventOutcome {
  const first = calls.find((call) => meets(call, event));
  return first ? { ...event, foundBy: first.key, lateMs: first.annunciatedAt! - event.from } : { ...event };
}

function needsCause({ watches }: AlarmRule): boolean {
  return watches.kind !== "silent" && watches.kind !== "frozen" && watches.kind !== "unusable share";
}

/** Within one unbroken time with data: what happened in a gap nobody knows. */
function longestQuiet({ spans }: Coverage, calls: readonly Activation[]): number {
  const times = calls.map(({ annunciatedAt }) => annunciatedAt!);
  let longest = 0;
  for (const { from, to } of spans) {
    let since = from;
    for (const at of times) {
      if (at < from || at > to) continue;
      longest = Math.max(longest, at - since);
      since = at;
    }
    longest = Math.max(longest, to - since);
  }
  return longest;
}
