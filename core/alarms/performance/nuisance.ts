import type { Annunciation, NamedAlarm } from "./annunciation.ts";

export const chatteringWithinMs = 60_000;
export const chatteringFrom = 3;
/** Ours: the standard names no time. Shorter than anybody can walk to a screen, read and act. */
export const fleetingBelowMs = 60_000;

export interface Chattering extends NamedAlarm {
  /** annunciations that were part of it */
  annunciations: number;
  /** most within one minute */
  worst: number;
}

export interface Fleeting extends NamedAlarm {
  annunciations: number;
}

/** Alarms that came three times or more within one minute: the working criterion of ISA-18.2-2009, as cited in the literature. */
export function chatteringOf(annunciations: readonly Annunciation[]): Chattering[] {
  return byAlarm(annunciations)
    .flatMap((ofOne): Chattering[] => {
      const { worst, members } = bursts(ofOne.map(({ at }) => at));
      return worst >= chatteringFrom ? [{ ...nameOf(ofOne[0]), annunciations: members, worst }] : [];
    })
    .sort((a, b) => b.annunciations - a.annunciations);
}

/** Alarms that went by themselves before anybody answered, within a minute, and were not chattering. */
export function fleetingOf(annunciations: readonly Annunciation[]): Fleeting[] {
  const chattering = new Set(chatteringOf(annunciations).map(idOf));
  return byAlarm(annunciations)
    .filter(([first]) => !chattering.has(idOf(first)))
    .flatMap((ofOne): Fleeting[] => {
      const fleeting = ofOne.filter(isFleeting).length;
      return fleeting > 0 ? [{ ...nameOf(ofOne[0]), annunciations: fleeting }] : [];
    })
    .sort((a, b) => b.annunciations - a.annunciations);
}

function isFleeting({ at, clearedAt, acknowledgedAt }: Annunciation): boolean {
  if (clearedAt === undefined || clearedAt - at >= fleetingBelowMs) return false;
  return acknowledgedAt === undefined || acknowledgedAt >= clearedAt;
}

function bursts(times: readonly number[]): { worst: number; members: number } {
  const members = new Set<number>();
  let worst = 0;
  for (let first = 0, i = 0; i < times.length; i++) {
    while (times[first] <= times[i] - chatteringWithinMs) first++;
    const count = i - first + 1;
    worst = Math.max(worst, count);
    if (count >= chatteringFrom) for (let j = first; j <= i; j++) members.add(j);
  }
  return { worst, members: members.size };
}

/** Annunciations gathered alarm by alarm; each list is in the order of time and has at least one. */
export function byAlarm(annunciations: readonly Annunciation[]): Annunciation[][] {
  const lists = new Map<string, Annunciation[]>();
  for (const annunciation of annunciations) {
    const id = idOf(annunciation);
    const list = lists.get(id);
    if (list) list.push(annunciation);
    else lists.set(id, [annunciation]);
  }
  return [...lists.values()];
}

export function nameOf({ stream, key, title, priority }: NamedAlarm): NamedAlarm {
  return { stream, key, title, priority };
}

function idOf({ stream, key }: NamedAlarm): string {
  return `${stream}/${key}`;
}
