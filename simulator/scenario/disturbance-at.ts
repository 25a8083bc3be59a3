import { type Disturbance, type PlantStreamId, undisturbed } from "../plant/index.ts";
import { type EventKind, kindOf, lagMs, type PlantEvent, settleMs } from "./event.ts";

const fieldOf: Partial<Record<EventKind, keyof Disturbance>> = {
  "co-solvent": "coSolvent",
  "beyond-range": "feed",
  fouling: "film",
  "lamp-ageing": "lamp",
  "temperature-swing": "heat",
  "grade-change": "grade",
  cleaning: "wash",
};

/** How far an event has come at a moment, 0–1 of its size. */
export function courseOf(event: PlantEvent, time: number): number {
  const { start, end } = event;
  switch (kindOf[event.kind].course) {
    case "lagged": {
      if (time < start || time > end + settleMs(event)) return 0;
      const lag = lagMs(event);
      const risen = 1 - Math.exp(-(Math.min(time, end) - start) / lag);
      return time <= end ? risen : risen * Math.exp(-(time - end) / lag);
    }
    case "growing":
      // It grows until someone cleans the window or changes the lamp: then it is gone at once.
      return time < start || time >= end ? 0 : (time - start) / (end - start);
    case "single":
    case "readings":
    case "laboratory":
      return 0;
  }
}

/** What all events together do to a stream's spectrum at one moment, but bubbles, which belong to a reading (see `readingAt`). */
export function disturbanceAt(events: readonly PlantEvent[], stream: PlantStreamId, time: number): Disturbance {
  let together: Disturbance | undefined;
  for (const event of events) {
    const field = fieldOf[event.kind];
    if (event.stream !== stream || field === undefined) continue;
    const course = courseOf(event, time);
    if (course === 0) continue;
    together ??= { ...undisturbed };
    together[field] += event.size * course;
  }
  return together ?? undisturbed;
}
