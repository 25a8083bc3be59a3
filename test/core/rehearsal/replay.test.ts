import fc from "fast-check";
import { expect, test } from "vitest";
import type { StreamRules } from "../../../core/judging/index.ts";
import type { AlarmRule } from "../../../core/limit-set/index.ts";
import { seededRandom } from "../../../core/pls/index.ts";
import { type Activation, Rehearsal } from "../../../core/rehearsal/index.ts";
import { makePlant, streamIds } from "../../../simulator/plant/index.ts";
import {
  builtInScenarios,
  processStateAt,
  readingAt,
  scenarioEvents,
  sequenceFrom,
  timeOf,
} from "../../../simulator/scenario/index.ts";
import { demoRules } from "../judging/brindle-quay.ts";
import { smallRules, spectrum, unfamiliarAlarm } from "../judging/small-stream.ts";
import { activationsOnRecord, Recorder } from "./recorder.ts";

const minute = 60_000;

function rehearsed(recorder: Recorder, { limitSet, periodMs }: StreamRules): Activation[] {
  const { alarms } = new Rehearsal(recorder.stretch(), { live: periodMs, history: periodMs }).run(limitSet);
  return alarms.flatMap(({ activations }) => activations);
}

const inOrder = (activations: readonly Activation[]) =>
  [...activations].sort((a, b) => a.raisedAt - b.raisedAt || a.key.localeCompare(b.key));

test.each(streamIds)(
  "two hours of %s with every kind of event: the rehearsal raises and clears what the record has, at the same times",
  (stream) => {
    const plant = makePlant(1);
    const periodMs = 2000;
    const start = Date.UTC(2026, 11, 1, 5);
    const events = scenarioEvents(builtInScenarios.faults, start, start, start + 120 * minute).filter(
      (event) => event.stream === stream,
    );
    const rules = demoRules(plant, stream, periodMs);
    const recorder = new Recorder(rules);
    let said = "";
    for (
      let n = sequenceFrom({ periodMs }, stream, start);
      timeOf({ periodMs }, stream, n) < start + 120 * minute;
      n++
    ) {
      const at = timeOf({ periodMs }, stream, n);
      const process = processStateAt(events, stream, at);
      if (JSON.stringify(process) !== said) recorder.hear({ ...process, since: at });
      said = JSON.stringify(process);
      const made = readingAt(plant, events, stream, n, { periodMs });
      if (made) recorder.read({ time: made.time, sequence: made.sequence, values: Float64Array.from(made.values) });
    }
    const onRecord = activationsOnRecord(recorder.notes);
    expect(onRecord.length).toBeGreaterThan(1);
    expect(inOrder(rehearsed(recorder, rules))).toEqual(inOrder(onRecord));
  },
);

const alarm = (key: string, more: Partial<AlarmRule>) => unfamiliarAlarm({ key, title: key, ...more });
const delays = fc.record({
  readings: fc.integer({ min: 1, max: 4 }),
  of: fc.constantFrom(undefined, 4, 6),
  seconds: fc.constantFrom(undefined, 0, 25, 60),
});
const anyAlarms = fc
  .tuple(delays, delays, fc.constantFrom("hold", "evaluate", "suppress"))
  .map(([on, off, untrusted]) => {
    const given = {
      onDelay: JSON.parse(JSON.stringify(on)) as AlarmRule["onDelay"],
      offDelay: JSON.parse(JSON.stringify({ ...off, of: undefined })) as AlarmRule["offDelay"],
      untrusted: untrusted as AlarmRule["untrusted"],
      suppressedIn: ["cleaning"],
    };
    return [
      alarm("unfamiliar", { ...given, suppressedForMinutesAfter: 1 }),
      alarm("range", { ...given, watches: { kind: "extrapolated", deadband: 0.2 } }),
      alarm("sparse", { ...given, watches: { kind: "sparse", deadband: 0 }, suppressedIn: [] }),
      alarm("high", {
        ...given,
        watches: { kind: "property", property: "a", side: "high", limit: 0.7, deadband: 0.1 },
      }),
      alarm("low", {
        ...given,
        watches: { kind: "property", property: "a", side: "low", limit: 0.4, deadband: 0 },
        latching: true,
      }),
      alarm("silent", { ...given, watches: { kind: "silent", periods: 3 } }),
      alarm("frozen", { ...given, watches: { kind: "frozen" } }),
      alarm("share", { ...given, watches: { kind: "unusable share", share: 0.5, among: 4 }, priority: "record only" }),
      alarm("drifting", {
        ...given,
        watches: { kind: "drifting", timeConstantMinutes: 1, withinMinutes: 20, fromRatio: 0.1, deadband: 0.5 },
      }),
    ];
  });
const runs = fc.array(
  fc.record({
    what: fc.constantFrom("inside", "foreign", "wide", "edge", "bad", "same", "cleaning", "running"),
    times: fc.integer({ min: 1, max: 9 }),
    afterMs: fc.constantFrom(10_000, 10_000, 10_000, 31_000, 90_000),
  }),
  { minLength: 1, maxLength: 25 },
);

test("whatever comes in, under whatever delays: the rehearsal raises and clears what the record has, at the same times", () => {
  let activations = 0;
  fc.assert(
    fc.property(anyAlarms, runs, fc.integer({ min: 1, max: 1e6 }), (alarms, sequence, seed) => {
      const rules = smallRules(alarms);
      const recorder = new Recorder(rules);
      const random = seededRandom(seed);
      let time = Date.UTC(2026, 5, 1);
      let n = 0;
      let values = spectrum(random);
      for (const { what, times, afterMs } of sequence) {
        if (what === "cleaning" || what === "running") {
          recorder.hear({ state: what, since: time + 1 });
          continue;
        }
        for (let k = 0; k < times; k++) {
          time += k === 0 ? afterMs : 10_000;
          if (what !== "same") values = made[what](random);
          recorder.read({ time, sequence: n++, values });
        }
      }
      if (n === 0) return;
      const onRecord = activationsOnRecord(recorder.notes);
      activations += onRecord.length;
      expect(inOrder(rehearsed(recorder, rules))).toEqual(inOrder(onRecord));
    }),
    { numRuns: 400 },
  );
  expect(activations).toBeGreaterThan(400);
});

const made: Record<"inside" | "foreign" | "wide" | "edge" | "bad", (random: () => number) => Float64Array> = {
  inside: (random) => spectrum(random),
  foreign: (random) => spectrum(random, { foreign: 0.03 * random() }),
  wide: (random) => spectrum(random, { a: 1.4 }),
  edge: (random) => spectrum(random, { a: 0.3 + 0.5 * random(), b: 0.3 }),
  bad: () => new Float64Array(41),
};
