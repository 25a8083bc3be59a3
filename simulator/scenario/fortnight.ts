import { keyOf, type PlantStreamId, uniformAt } from "../plant/index.ts";
import { type EventKind, isOfTheLine, type PlantEvent, settleMs } from "./event.ts";

const minute = 60_000;
const hour = 60 * minute;
const day = 24 * hour;
export const cycleMs = 14 * day;

interface Planned {
  stream: PlantStreamId;
  kind: EventKind;
  /** day of the cycle, 0–13, before the seed turns the whole plan round */
  day: number;
  /** earliest and latest start, hours into the day */
  hours: readonly [number, number];
  minutes: number;
}

/** What goes wrong in a fortnight of a plant that mostly goes well. One entry a stream and day, so that nothing hides anything else; the laboratory is a place of its own. */
const plan: readonly Planned[] = [
  { stream: "bq-201", kind: "cleaning", day: 1, hours: [5, 8], minutes: 35 },
  { stream: "bq-201", kind: "beyond-range", day: 3, hours: [2, 20], minutes: 70 },
  { stream: "bq-201", kind: "grade-change", day: 5, hours: [5, 7], minutes: 720 },
  { stream: "bq-201", kind: "silent", day: 7, hours: [1, 22], minutes: 18 },
  { stream: "bq-201", kind: "cleaning", day: 8, hours: [5, 8], minutes: 35 },
  { stream: "bq-201", kind: "temperature-swing", day: 10, hours: [9, 15], minutes: 95 },
  { stream: "bq-201", kind: "grade-change", day: 12, hours: [13, 15], minutes: 480 },
  { stream: "bq-305", kind: "cleaning", day: 0, hours: [13, 16], minutes: 40 },
  { stream: "bq-305", kind: "co-solvent", day: 2, hours: [3, 18], minutes: 190 },
  { stream: "bq-305", kind: "grade-change", day: 4, hours: [5, 7], minutes: 1000 },
  { stream: "bq-305", kind: "frozen", day: 6, hours: [2, 21], minutes: 25 },
  { stream: "bq-305", kind: "cleaning", day: 7, hours: [13, 16], minutes: 40 },
  { stream: "bq-305", kind: "co-solvent", day: 11, hours: [4, 20], minutes: 45 },
  { stream: "bq-410", kind: "fouling", day: 4, hours: [1, 9], minutes: 540 },
  { stream: "bq-410", kind: "cleaning", day: 5, hours: [6, 9], minutes: 30 },
  { stream: "bq-410", kind: "silent", day: 6, hours: [3, 21], minutes: 35 },
  { stream: "bq-410", kind: "lamp-ageing", day: 8, hours: [1, 4], minutes: 960 },
  { stream: "bq-410", kind: "beyond-range", day: 10, hours: [2, 20], minutes: 80 },
  { stream: "bq-410", kind: "cleaning", day: 12, hours: [6, 9], minutes: 30 },
  { stream: "bq-201", kind: "lab-bias", day: 8, hours: [12, 18], minutes: 4200 },
  { stream: "bq-410", kind: "lab-bias", day: 1, hours: [6, 12], minutes: 3600 },
];

const bubblesPerCycle: Record<PlantStreamId, number> = { "bq-201": 9, "bq-305": 6, "bq-410": 4 };

/**
 * The events of a stretch of history, at times that follow from the seed and absolute time. An event that is not over, with all its after-effects, by
 * the end of the stretch is left out whole, so that a live run takes over from a healthy plant.
 *
 * @returns in the order of their starts
 */
export function historyEvents(seed: number, from: number, to: number): PlantEvent[] {
  const events: PlantEvent[] = [];
  // One cycle more before and after: the seed turns the plan round by up to a cycle.
  for (let cycle = Math.floor(from / cycleMs) - 2; cycle * cycleMs < to; cycle++)
    events.push(...eventsOfCycle(seed, cycle));
  return events
    .filter((event) => event.end + settleMs(event) > from && event.end + settleMs(event) <= to)
    .sort((a, b) => a.start - b.start);
}

function eventsOfCycle(seed: number, cycle: number): PlantEvent[] {
  const turn = Math.floor(14 * uniformAt(seed, keyOf("fortnight/turn"), 0)) * day;
  const start = cycle * cycleMs + turn;
  const planned = plan.map((entry, i): PlantEvent => {
    const [earliest, latest] = entry.hours;
    const hours = earliest + (latest - earliest) * uniformAt(seed, keyOf(`fortnight/${i}`), cycle);
    const begins = Math.round((start + entry.day * day + hours * hour) / 1000) * 1000;
    return { kind: entry.kind, stream: entry.stream, start: begins, end: begins + entry.minutes * minute, size: 1 };
  });
  return [...planned, ...bubblesOfCycle(seed, cycle, start, planned)];
}

/** Bubbles come at any time, but not within another event, where they would go unseen. */
function bubblesOfCycle(seed: number, cycle: number, start: number, planned: readonly PlantEvent[]): PlantEvent[] {
  return (Object.entries(bubblesPerCycle) as [PlantStreamId, number][]).flatMap(([stream, count]) =>
    Array.from({ length: count }, (_, i): PlantEvent => {
      const share = uniformAt(seed, keyOf(`fortnight/bubble/${stream}/${i}`), cycle);
      const at = Math.round((start + ((i + share) / count) * cycleMs) / 1000) * 1000;
      return { kind: "bubble", stream, start: at, end: at, size: 1 };
    }).filter(
      ({ start: at }) =>
        !planned.some(
          (event) =>
            isOfTheLine(event) &&
            event.stream === stream &&
            event.start - hour < at &&
            at < event.end + settleMs(event) + hour,
        ),
    ),
  );
}
