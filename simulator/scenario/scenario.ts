import { type Static, Type } from "typebox";
import { streamIds } from "../plant/index.ts";
import { eventKinds, type PlantEvent, settleMs } from "./event.ts";

export const ScenarioSchema = Type.Object(
  {
    format: Type.Literal("millrace-scenario"),
    formatVersion: Type.Literal(1),
    name: Type.String({ minLength: 1, maxLength: 100 }),
    /** the programme starts again after this long; absent: it runs once */
    repeatMinutes: Type.Optional(Type.Number({ exclusiveMinimum: 0, maximum: 100_000 })),
    /** grab samples of every line, and how long their results take; absent: no laboratory */
    laboratory: Type.Optional(
      Type.Object(
        {
          everyMinutes: Type.Number({ minimum: 0.1, maximum: 100_000 }),
          turnaroundMinutes: Type.Number({ minimum: 0, maximum: 100_000 }),
        },
        { additionalProperties: false },
      ),
    ),
    events: Type.Array(
      Type.Object(
        {
          kind: Type.Enum(eventKinds),
          stream: Type.Enum(streamIds),
          /** after the start of the run (of the programme, where it repeats) */
          startSeconds: Type.Number({ minimum: 0, maximum: 10_000_000 }),
          /** not for a bubble, which spoils a single reading */
          durationSeconds: Type.Optional(Type.Number({ exclusiveMinimum: 0, maximum: 10_000_000 })),
          /** 1: the usual size of such an event on that stream */
          size: Type.Optional(Type.Number({ exclusiveMinimum: 0, maximum: 20 })),
        },
        { additionalProperties: false },
      ),
      { maxItems: 10_000 },
    ),
  },
  { additionalProperties: false },
);

/** A programme of events whose times count from the start of a run. */
export type Scenario = Static<typeof ScenarioSchema>;

/** The events of a programme that can touch the stretch from `from` to `to`, for a run that began at `start` (all epoch ms), in order. */
export function scenarioEvents(scenario: Scenario, start: number, from: number, to: number): PlantEvent[] {
  const once = eventsOfRound(scenario, start);
  const everyMs = scenario.repeatMinutes === undefined ? undefined : scenario.repeatMinutes * 60_000;
  if (everyMs === undefined) return touching(once, from, to);
  const longest = Math.max(0, ...once.map((event) => event.end + settleMs(event) - start));
  const first = Math.max(0, Math.floor((from - longest - start) / everyMs));
  const last = Math.floor((to - start) / everyMs);
  const rounds: PlantEvent[] = [];
  for (let round = first; round <= last; round++) rounds.push(...eventsOfRound(scenario, start + round * everyMs));
  return touching(rounds, from, to);
}

function eventsOfRound(scenario: Scenario, start: number): PlantEvent[] {
  return scenario.events.map(({ kind, stream, startSeconds, durationSeconds = 0, size = 1 }) => {
    const begins = start + startSeconds * 1000;
    return { kind, stream, start: begins, end: begins + durationSeconds * 1000, size };
  });
}

/** A bubble has no length, but may spoil a reading up to one period after it: a minute's grace keeps it in sight. */
const graceMs = 60_000;

function touching(events: PlantEvent[], from: number, to: number): PlantEvent[] {
  return events
    .filter((event) => event.start <= to && event.end + settleMs(event) + graceMs >= from)
    .sort((a, b) => a.start - b.start);
}
