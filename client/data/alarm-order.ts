import type { OpenAlarm, Priority } from "../../core/messages/index.ts";

/** The three that call a person, most urgent first. What is "record only" never calls. */
export const calling = ["high", "medium", "low"] as const satisfies readonly Priority[];
const rank: Record<Priority, number> = { high: 0, medium: 1, low: 2, "record only": 3 };

/** Does it wait for somebody to acknowledge it? */
export function isWaiting({ state }: Pick<OpenAlarm, "state">): boolean {
  return state === "unacknowledged" || state === "returned unacknowledged" || state === "latched unacknowledged";
}

/** Has its condition gone, so that only a person keeps it open? */
export function isGone({ state }: Pick<OpenAlarm, "state">): boolean {
  return state === "returned unacknowledged" || state.startsWith("latched");
}

/** Most urgent first; among equals the ones that wait for a person before the acknowledged, then the newest. A copy. */
export function byUrgency(alarms: readonly OpenAlarm[]): OpenAlarm[] {
  const waits = (alarm: OpenAlarm) => (isWaiting(alarm) ? 0 : 1);
  return [...alarms].sort(
    (a, b) => rank[a.priority] - rank[b.priority] || waits(a) - waits(b) || b.raisedAt - a.raisedAt,
  );
}

/** How many are open of one priority, and how many of them nobody has acknowledged. */
export function countOf(alarms: readonly OpenAlarm[], priority: Priority): { open: number; waiting: number } {
  const held = alarms.filter((alarm) => alarm.priority === priority);
  return { open: held.length, waiting: held.filter(isWaiting).length };
}
