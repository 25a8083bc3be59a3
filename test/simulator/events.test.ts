import { describe, expect, test } from "vitest";
import { makePlant, type PlantStreamId, spectrumAt, streamIds, undisturbed } from "../../simulator/plant/index.ts";
import {
  builtInScenarios,
  courseOf,
  disturbanceAt,
  type EventKind,
  eventKinds,
  type Grid,
  historyEvents,
  isOfTheLine,
  kindOf,
  lagMs,
  type PlantEvent,
  processStateAt,
  readingAt,
  scenarioEvents,
  sequenceFrom,
  settleMs,
  timeOf,
  truthOf,
} from "../../simulator/scenario/index.ts";

const plant = makePlant(1);
const minute = 60_000;
const day = 86_400_000;
const noon = Date.UTC(2026, 10, 20, 12);
const grid: Grid = { periodMs: 2000 };

const event = (kind: EventKind, stream: PlantStreamId = "bq-305", minutes = 12): PlantEvent => ({
  kind,
  stream,
  start: noon,
  end: noon + minutes * minute,
  size: 1,
});

/** The readings of a stretch; undefined where the analyzer was silent. */
const readings = (events: PlantEvent[], from: number, to: number, stream: PlantStreamId = "bq-305") => {
  const first = sequenceFrom(grid, stream, from);
  const count = sequenceFrom(grid, stream, to) - first;
  return Array.from({ length: count }, (_, i) => readingAt(plant, events, stream, first + i, grid));
};

describe("the grid of readings", () => {
  test.each(streamIds)("%s: sequence and time belong together at every period, and sequences rise by one", (stream) => {
    for (const periodMs of [3, 7, 250, 2000, 30_000]) {
      const first = sequenceFrom({ periodMs }, stream, noon + 123);
      for (let sequence = first; sequence < first + 50; sequence++) {
        const time = timeOf({ periodMs }, stream, sequence);
        expect(Number.isInteger(time)).toBe(true);
        expect(time).toBeGreaterThanOrEqual(noon + 123);
        expect(sequenceFrom({ periodMs }, stream, time)).toBe(sequence);
        expect(sequenceFrom({ periodMs }, stream, time + 1)).toBe(sequence + 1);
      }
    }
  });

  test("the three streams never read at the same moment", () => {
    const moments = streamIds.map((stream) => timeOf(grid, stream, 1000));
    expect(new Set(moments).size).toBe(3);
  });
});

describe("how an event comes and goes", () => {
  test("one that flows in rises with its lag, is nearly whole by its end, and is gone when it has settled", () => {
    const flowing = event("co-solvent");
    const lag = lagMs(flowing);
    expect(lag).toBe(minute);
    expect(courseOf(flowing, noon - 1)).toBe(0);
    expect(courseOf(flowing, noon + lag)).toBeCloseTo(1 - Math.exp(-1), 12);
    expect(courseOf(flowing, flowing.end)).toBeGreaterThan(0.99);
    expect(courseOf(flowing, flowing.end + lag)).toBeCloseTo(courseOf(flowing, flowing.end) * Math.exp(-1), 12);
    expect(courseOf(flowing, flowing.end + settleMs(flowing))).toBeLessThan(0.001);
    expect(courseOf(flowing, flowing.end + settleMs(flowing) + 1)).toBe(0);
  });

  test("one that grows is half at half time, and gone at once when it ends", () => {
    const growing = event("fouling");
    expect(courseOf(growing, noon + 6 * minute)).toBeCloseTo(0.5, 12);
    expect(courseOf(growing, growing.end - 1)).toBeGreaterThan(0.99);
    expect(courseOf(growing, growing.end)).toBe(0);
  });

  test("events touch their own stream only, and add up", () => {
    const both = [event("co-solvent"), event("fouling")];
    const at = noon + 6 * minute;
    expect(disturbanceAt(both, "bq-201", at)).toBe(undisturbed);
    const together = disturbanceAt(both, "bq-305", at);
    expect(together.film).toBeCloseTo(0.5, 12);
    expect(together.coSolvent).toBeGreaterThan(0.99);
    expect({ ...together, film: 0, coSolvent: 0 }).toEqual(undisturbed);
    const twice = disturbanceAt([event("fouling"), { ...event("fouling"), size: 2 }], "bq-305", at);
    expect(twice.film).toBeCloseTo(1.5, 12);
  });
});

describe("events in the readings", () => {
  test("a bubble spoils one reading, the first at or after its start, at any period", () => {
    for (const periodMs of [500, 2000, 30_000]) {
      const bubble = { ...event("bubble"), end: noon };
      const first = sequenceFrom({ periodMs }, "bq-305", noon);
      const spoilt = [-2, -1, 0, 1, 2].map((step) => {
        const with_ = readingAt(plant, [bubble], "bq-305", first + step, { periodMs })!.values;
        const without = readingAt(plant, [], "bq-305", first + step, { periodMs })!.values;
        return Math.max(...with_.map((value, j) => Math.abs(value - without[j]!))) > 0.01;
      });
      expect(spoilt).toEqual([false, false, true, false, false]);
    }
  });

  test("a silent analyzer sends nothing from start to end, and goes on with the sequence that it would have had", () => {
    const silent = event("silent");
    const seen = readings([silent], noon - minute, silent.end + minute);
    const quiet = readings([], noon - minute, silent.end + minute);
    seen.forEach((reading, i) => {
      const { time } = quiet[i]!;
      if (time >= silent.start && time < silent.end) expect(reading).toBeUndefined();
      else expect(reading).toEqual(quiet[i]);
    });
    expect(seen.filter((reading) => reading === undefined)).toHaveLength(360);
  });

  test("a frozen analyzer repeats its first spectrum under new times and sequences, then tells the truth again", () => {
    const frozen = event("frozen");
    const during = readings([frozen], frozen.start, frozen.end) as NonNullable<ReturnType<typeof readingAt>>[];
    expect(new Set(during.map(({ values }) => values.join())).size).toBe(1);
    expect(new Set(during.map(({ time }) => time)).size).toBe(360);
    expect(new Set(during.map(({ sequence }) => sequence)).size).toBe(360);
    const [after] = readings([frozen], frozen.end, frozen.end + 3000);
    expect(after).toEqual(readings([], frozen.end, frozen.end + 3000)[0]);
  });

  test.each(eventKinds.filter((kind) => ["lagged", "growing"].includes(kindOf[kind].course)))(
    "%s shows in the spectra while it lasts, and not before nor after",
    (kind) => {
      const happens = event(kind);
      const away = (time: number) => {
        const sequence = sequenceFrom(grid, "bq-305", time);
        const changed = readingAt(plant, [happens], "bq-305", sequence, grid)!.values;
        const calm = readingAt(plant, [], "bq-305", sequence, grid)!.values;
        return Math.max(...changed.map((value, j) => Math.abs(value - calm[j]!)));
      };
      expect(away(noon - 2000)).toBe(0);
      expect(away(happens.end - 2000)).toBeGreaterThan(0.003);
      expect(away(happens.end + settleMs(happens) + 1)).toBe(0);
    },
  );

  test("the context carries the temperature of the liquid, to a tenth", () => {
    const hot = event("temperature-swing");
    const [late] = readings([hot], hot.end - 2000, hot.end);
    const [calm] = readings([], hot.end - 2000, hot.end);
    expect(late!.context.temperature - calm!.context.temperature).toBeGreaterThan(15);
    expect((late!.context.temperature * 10) % 1).toBeCloseTo(0, 6);
  });

  test("the process state follows cleaning and grade without a lag", () => {
    const events = [event("cleaning"), event("grade-change", "bq-201")];
    expect(processStateAt(events, "bq-305", noon - 1)).toEqual({ state: "running", grade: "blend 30" });
    expect(processStateAt(events, "bq-305", noon)).toEqual({ state: "cleaning", grade: "blend 30" });
    expect(processStateAt(events, "bq-201", noon)).toEqual({ state: "running", grade: "fine" });
    expect(processStateAt(events, "bq-305", noon + 12 * minute)).toEqual({ state: "running", grade: "blend 30" });
  });
});

describe("the events of a recorded fortnight", () => {
  const to = Date.UTC(2026, 11, 1, 5);
  const from = to - 14 * day;

  test.each([1, 2, 3, 11, 99])(
    "seed %i: every kind happens, each stream has a bubble, and most of the time all is well",
    (seed) => {
      const events = historyEvents(seed, from, to);
      // An event on the border of the stretch may be cut off; what happens twice in a cycle is always there.
      const kinds = new Set(events.map(({ kind }) => kind));
      expect(eventKinds.filter((kind) => !kinds.has(kind)).length).toBeLessThanOrEqual(1);
      for (const stream of streamIds) {
        const ours = events.filter((each) => each.stream === stream);
        expect(ours.some(({ kind }) => kind === "bubble")).toBe(true);
        const troubledMs = ours
          .filter((each) => each.kind !== "grade-change" && isOfTheLine(each))
          .reduce((sum, each) => sum + each.end + settleMs(each) - each.start, 0);
        expect(troubledMs / (14 * day)).toBeLessThan(0.1);
      }
    },
  );

  test("no two events of a stream overlap, so that the truth of each stands alone", () => {
    for (const seed of [1, 2, 3, 4, 5]) {
      for (const stream of streamIds) {
        const ours = historyEvents(seed, from - 30 * day, to).filter(
          (each) => each.stream === stream && isOfTheLine(each),
        );
        for (let i = 1; i < ours.length; i++) {
          expect(ours[i]!.start).toBeGreaterThan(ours[i - 1]!.end + settleMs(ours[i - 1]!));
        }
      }
    }
  });

  test("the same moments have the same events whatever stretch is asked for", () => {
    const whole = historyEvents(1, from, to);
    const part = historyEvents(1, from + 3 * day, to);
    const late = whole.filter((each) => each.end + settleMs(each) > from + 3 * day);
    expect(part).toEqual(late);
    expect(part.length).toBeGreaterThan(10);
    expect(part.length).toBeLessThan(whole.length);
  });

  test("at the end of the stretch the plant is healthy, so that a live run takes over without a seam", () => {
    for (let hours = 0; hours < 14 * 24; hours += 3) {
      const end = to - hours * 3_600_000;
      const events = historyEvents(1, end - day, end);
      for (const stream of streamIds) {
        const last = sequenceFrom(grid, stream, end);
        expect(readingAt(plant, events, stream, last, grid)!.values).toEqual(
          spectrumAt(plant, stream, timeOf(grid, stream, last)),
        );
      }
    }
  });

  test("the truth names each event's label and verdicts, and where the one spoilt reading lies", () => {
    const periodMs = 30_000;
    const events = historyEvents(1, from, to);
    const truth = truthOf(events, streamIds, { seed: 1, from, to, periodMs });
    expect(truth.events).toHaveLength(events.length);
    const bubble = truth.events.find(({ kind }) => kind === "bubble")!;
    const sequence = sequenceFrom({ periodMs }, bubble.stream, bubble.start);
    expect(timeOf({ periodMs }, bubble.stream, sequence)).toBe(bubble.start);
    expect(bubble).toMatchObject({ end: bubble.start, label: "false", annunciates: false });
    const washed = truth.states.filter(({ state }) => state === "cleaning");
    expect(washed).toHaveLength(events.filter(({ kind }) => kind === "cleaning").length);
    expect(truth.states.map(({ time }) => time)).toEqual(truth.states.map(({ time }) => time).sort((a, b) => a - b));
  });
});

describe("programmes for live runs", () => {
  test("calm holds nothing, faults every kind once within two hours, none overlapping on its stream", () => {
    expect(builtInScenarios.calm.events).toEqual([]);
    const events = scenarioEvents(builtInScenarios.faults, noon, noon, noon + 120 * minute);
    // The laboratory takes days to show a bias; its part in a programme is its own test.
    expect(events.map(({ kind }) => kind).sort()).toEqual(eventKinds.filter((kind) => kind !== "lab-bias").sort());
    for (const each of events) {
      expect(each.end + settleMs(each)).toBeLessThanOrEqual(noon + 120 * minute);
      for (const other of events.filter((o) => o !== each && o.stream === each.stream)) {
        expect(other.start > each.end + settleMs(each) || other.end + settleMs(other) < each.start).toBe(true);
      }
    }
  });

  test("demo shows a co-solvent on bq-305 from second 75 to 315, and again half an hour later", () => {
    const seen = (from: number) =>
      scenarioEvents(builtInScenarios.demo, noon, noon + from * 1000, noon + from * 1000).filter(
        ({ kind, start, end }) => kind === "co-solvent" && start <= noon + from * 1000 && end > noon + from * 1000,
      ).length;
    expect([74, 75, 314, 315].map(seen)).toEqual([0, 1, 1, 0]);
    expect([74, 75, 314, 315].map((second) => seen(second + 1800))).toEqual([0, 1, 1, 0]);
    expect([74, 75, 314, 315].map((second) => seen(second + 50 * 1800))).toEqual([0, 1, 1, 0]);
  });

  test("a programme that repeats keeps an event in sight that reaches over the end of a round", () => {
    const scenario = {
      ...builtInScenarios.calm,
      repeatMinutes: 10,
      events: [{ kind: "fouling" as const, stream: "bq-410" as const, startSeconds: 540, durationSeconds: 120 }],
    };
    const at = noon + 630_000;
    const [reaching] = scenarioEvents(scenario, noon, at, at);
    expect(reaching).toMatchObject({ start: noon + 540_000, end: noon + 660_000 });
  });
});
