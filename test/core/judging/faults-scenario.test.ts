import { beforeAll, describe, expect, test } from "vitest";
import { type Annunciation, alarmHistory, chatteringOf, fleetingOf } from "../../../core/alarms/index.ts";
import { commandAlarm, freshState, hearProcessState, judge, type Note, tick } from "../../../core/judging/index.ts";
import { makePlant, type PlantStreamId, streamIds } from "../../../simulator/plant/index.ts";
import {
  builtInScenarios,
  type EventKind,
  historyEvents,
  type PlantEvent,
  processStateAt,
  readingAt,
  scenarioEvents,
  sequenceFrom,
  settleMs,
  timeOf,
} from "../../../simulator/scenario/index.ts";
import { demoRules } from "./brindle-quay.ts";

/*
 * Two hours of the invented plant with every kind of event once, through the product's own judging with the demo's models and alarms. The
 * truth is the scenario's; what each event must call somebody for is written here, by hand, from what the event is.
 */
const plant = makePlant(1);
const minute = 60_000;
const start = Date.UTC(2026, 11, 1, 5);
const periodMs = 2000;

/** must: each of these has to call somebody during the event · may: may do so besides · everything else is a false alarm. */
const truth: Partial<Record<`${PlantStreamId} ${EventKind}`, { must: string[]; may?: string[] }>> = {
  "bq-305 co-solvent": { must: ["unfamiliar"] },
  // Feed beyond the range: outside the calibration, and outside the product's own limits, as long as the reading is trusted.
  "bq-201 beyond-range": { must: ["extrapolated", "water-high", "ethanol-low"] },
  "bq-305 silent": { must: ["silent"] },
  "bq-305 frozen": { must: ["frozen"] },
  "bq-410 fouling": { must: ["unfamiliar"], may: ["drifting"] },
  "bq-410 lamp-ageing": { must: ["unfamiliar"], may: ["drifting"] },
  // A hot line is outside the calibration at once; Q comes up to two thirds of its limit, and a warning of that is none too many.
  "bq-201 temperature-swing": { must: ["extrapolated"], may: ["drifting"] },
};
/** Nobody is to be called for these. */
const quiet = new Set<EventKind>(["bubble", "grade-change", "cleaning"]);

/** One stream through a stretch of time: readings, what the plant says of the process, and an operator who acknowledges after a minute. */
function run(
  stream: PlantStreamId,
  events: readonly PlantEvent[],
  { from, to, periodMs }: { from: number; to: number; periodMs: number },
): Note[] {
  const rules = demoRules(plant, stream, periodMs);
  const notes: Note[] = [];
  let state = freshState;
  let said = "";
  const first = sequenceFrom({ periodMs }, stream, from);
  for (let n = first; timeOf({ periodMs }, stream, n) < to; n++) {
    const at = timeOf({ periodMs }, stream, n);
    const process = processStateAt(events, stream, at);
    if (JSON.stringify(process) !== said) {
      said = JSON.stringify(process);
      const [next, heard] = hearProcessState(state, { ...process, since: at }, at, rules);
      state = next;
      if (heard.kind === "heard") notes.push(...heard.notes);
    }
    const made = readingAt(plant, events, stream, n, { periodMs });
    if (made) {
      const reading = { time: made.time, sequence: made.sequence, values: Float64Array.from(made.values) };
      const [next, judgement] = judge(state, { reading, receivedAt: at, known: false }, rules);
      state = next;
      if (judgement.kind === "judged") notes.push(...judgement.notes);
    }
    const [ticked, ticks] = tick(state, at + 500, from, rules);
    state = ticked;
    notes.push(...ticks);
    for (const [key, alarm] of Object.entries(state.alarms)) {
      if (!alarm.standing.endsWith("unacknowledged") || at - alarm.activation!.raisedAt < minute) continue;
      const done = commandAlarm(state, key, { kind: "acknowledge", at, by: "R. Quill" }, rules);
      state = done.state;
      notes.push(...done.notes);
    }
  }
  return notes;
}

/** What people were called for. */
function annunciationsOf(notes: readonly Note[]): Annunciation[] {
  return alarmHistory(notes.map((note, i) => ({ ...note, cursor: i + 1 }))).annunciations;
}

describe("two hours with every kind of event", () => {
  const events = scenarioEvents(builtInScenarios.faults, start, start, start + 120 * minute);
  const notes = new Map<PlantStreamId, Note[]>();
  let annunciations: Annunciation[] = [];

  beforeAll(() => {
    for (const stream of streamIds) {
      const own = events.filter((event) => event.stream === stream);
      notes.set(stream, run(stream, own, { from: start, to: start + 120 * minute, periodMs }));
    }
    annunciations = [...notes.values()].flatMap(annunciationsOf);
  });

  const isDuring = (event: PlantEvent, { stream, at }: Annunciation) =>
    stream === event.stream && event.start <= at && at <= event.end + settleMs(event);
  const expectationOf = ({ stream, kind }: PlantEvent) => truth[`${stream} ${kind}`] ?? { must: [] };
  const at = (time: number) => `${((time - start) / minute).toFixed(1)} min`;

  test("each event calls people for exactly what it should", () => {
    const found: string[] = [];
    const missed: string[] = [];
    const explained = new Set<Annunciation>();
    for (const event of events) {
      const { must, may = [] } = expectationOf(event);
      const during = annunciations.filter((each) => isDuring(event, each));
      for (const each of during) if ([...must, ...may].includes(each.key)) explained.add(each);
      for (const key of must) {
        const first = during.find((each) => each.key === key);
        const which = `${event.stream} ${event.kind} (${at(event.start)}): ${key}`;
        if (first) found.push(`${which} after ${at(first.at - event.start + start)}`);
        else missed.push(which);
      }
    }
    const wrong = annunciations
      .filter((each) => !explained.has(each))
      .map(({ stream, key, at: when }) => `${stream} ${key} at ${at(when)}`);
    console.log(
      [
        `found ${found.length}, missed ${missed.length}, false ${wrong.length}`,
        ...found.map((line) => `  found   ${line}`),
        ...missed.map((line) => `  missed  ${line}`),
        ...wrong.map((line) => `  false   ${line}`),
      ].join("\n"),
    );
    expect({ missed, wrong }).toEqual({ missed: [], wrong: [] });
    expect(found).toHaveLength(Object.values(truth).reduce((n, { must }) => n + must.length, 0));
  });

  test("every event of the programme was judged: either something must come of it, or nothing may", () => {
    for (const event of events) expect(quiet.has(event.kind) || expectationOf(event).must.length > 0).toBe(true);
  });

  test("no alarm is annunciated twice for one event, none chatters, none is fleeting", () => {
    for (const event of events) {
      const keys = annunciations.filter((each) => isDuring(event, each)).map(({ key }) => key);
      expect(keys, `${event.stream} ${event.kind}`).toEqual([...new Set(keys)]);
    }
    expect(chatteringOf(annunciations)).toEqual([]);
    expect(fleetingOf(annunciations)).toEqual([]);
  });

  test("what came while the line was cleaned is on record, though nobody was called", () => {
    const held = notes.get("bq-305")!.filter(({ kind }) => kind === "alarm raised unannounced");
    expect(held.map(({ setAside }) => [setAside?.key, setAside?.state, setAside?.suppressed?.state])).toEqual([
      ["unfamiliar", "suppressed", "cleaning"],
      ["extrapolated", "suppressed", "cleaning"],
    ]);
  });

  test("a bubble is an excursion to nobody", () => {
    const bubble = events.find(({ kind }) => kind === "bubble")!;
    const near = notes
      .get(bubble.stream)!
      .filter(({ at: when }) => bubble.start <= when && when < bubble.start + 2 * minute);
    expect(near).toEqual([]);
  });
});

test("a slow film on the window is foretold: the drift alarm comes at least twenty minutes before Q reaches its limit", () => {
  const to = start;
  const fouling = historyEvents(1, to - 14 * 24 * 60 * minute, to).find(({ kind }) => kind === "fouling")!;
  const from = fouling.start - 60 * minute;
  const notes = run(fouling.stream, [fouling], { from, to: fouling.end, periodMs: 30_000 });
  const [drifting, unfamiliar] = ["drifting", "unfamiliar"].map(
    (key) => annunciationsOf(notes).find((each) => each.key === key)!,
  );
  expect(drifting.at).toBeGreaterThan(fouling.start);
  expect(unfamiliar.at - drifting.at).toBeGreaterThan(20 * minute);
  const { says } = notes.find(({ kind, alarm }) => kind === "alarm raised" && alarm?.key === "drifting")!;
  expect(says).toMatch(
    /Q 0\.[6-9]\d? × limit and rising: it reaches its limit in about \d+\u202fmin if it goes on so\.$/,
  );
});
