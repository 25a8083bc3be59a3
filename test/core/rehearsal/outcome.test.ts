import { expect, test } from "vitest";
import type { LimitSet } from "../../../core/limit-set/index.ts";
import {
  bestOf,
  dataGap,
  type LabelledEvent,
  noGap,
  type Outcome,
  outcomeOf,
  type RecordedStretch,
  Rehearsal,
  type SweepCell,
  settingOf,
  withoutCuts,
  withSetting,
} from "../../../core/rehearsal/index.ts";
import { unfamiliarAlarm } from "../judging/small-stream.ts";

const minute = 60_000;
const noLimit = () => Number.NaN;

/** A limit of 1 for each statistic, and one alarm that two readings in a row raise and two end. */
const limits: Pick<LimitSet, "statistics" | "alarms"> = {
  statistics: {
    t2: { method: "fixed", limit: 1 },
    q: { method: "box", confidence: 0.95, limit: 1 },
    nearest: { method: "fixed", limit: 1 },
  },
  alarms: [unfamiliarAlarm({ onDelay: { readings: 2 }, offDelay: { readings: 2 } })],
};

/** A reading a minute from minute 0: Q is 2 in these minutes, 0.5 in all others. */
function stretchOf(length: number, beyond: readonly number[], gapsBefore: readonly number[] = []): RecordedStretch {
  const time = Float64Array.from({ length }, (_, i) => i * minute);
  return {
    stream: "small",
    time,
    received: time,
    t2: new Float64Array(length).fill(0.5),
    q: Float64Array.from({ length }, (_, i) => (beyond.includes(i) ? 2 : 0.5)),
    nearest: new Float64Array(length).fill(0.5),
    usability: new Uint8Array(length),
    gap: Uint8Array.from({ length }, (_, i) => (gapsBefore.includes(i) ? dataGap : noGap)),
    history: new Uint8Array(length),
    properties: new Map(),
    models: [],
    processStates: [],
  };
}

const event = (from: number, to: number): LabelledEvent => ({
  ...{ id: `small/unfamiliar/${from}`, kind: "unfamiliar", label: "process change" },
  ...{ from: from * minute, to: to * minute },
});

function outcome(stretch: RecordedStretch, truth: readonly LabelledEvent[] = []): Outcome {
  return outcomeOf(new Rehearsal(stretch, { live: minute, history: minute }).run(limits), truth);
}
const minutesOf = (outcome: Outcome) => outcome.calls.map(({ annunciatedAt }) => annunciatedAt! / minute);

test("a quiet stretch calls nobody, and is quiet from its first reading to its last", () => {
  const { annunciations, perDay, days, longestQuietMs } = outcome(stretchOf(101, []));
  expect([annunciations, perDay, days, longestQuietMs]).toEqual([0, 0, 100 / 1440, 100 * minute]);
});

test("calls, their rate, the time in alarm and the longest quiet time are those counted by hand", () => {
  // Beyond at 20–24: called at 21, cleared at 26. Beyond once at 50: nobody is called. Beyond at 70–71: called at 71, cleared at 73.
  const seen = outcome(stretchOf(101, [20, 21, 22, 23, 24, 50, 70, 71]));
  expect(minutesOf(seen)).toEqual([21, 71]);
  expect(seen.perDay).toBeCloseTo((2 * 1440) / 100, 10);
  expect(seen.alarms[0].inAlarm).toBeCloseTo((5 + 2) / 100, 10);
  expect(seen.longestQuietMs).toBe(50 * minute);
  expect(seen.readings).toEqual({ usable: 101, inside: 93, t2: 0, q: 8, nearest: 0 });
});

test("an event that an alarm met is found, with how late; one that none met is missed; a call outside all is causeless", () => {
  const seen = outcome(stretchOf(101, [20, 21, 22, 23, 24, 70, 71]), [event(18, 24), event(40, 45)]);
  expect([seen.found, seen.missed]).toEqual([1, 1]);
  expect(seen.events[0]).toMatchObject({ foundBy: "unfamiliar", lateMs: 3 * minute });
  expect(seen.events[1].foundBy).toBeUndefined();
  expect(seen.causeless.map(({ annunciatedAt }) => annunciatedAt! / minute)).toEqual([71]);
});

test("an alarm for the record only calls nobody and finds nothing", () => {
  const quiet = { ...limits, alarms: limits.alarms.map((rule) => ({ ...rule, priority: "record only" as const })) };
  const rehearsed = new Rehearsal(stretchOf(101, [20, 21]), { live: minute, history: minute }).run(quiet);
  const seen = outcomeOf(rehearsed, [event(19, 22)]);
  expect([seen.annunciations, seen.missed]).toEqual([0, 1]);
  expect(seen.alarms[0].inAlarm).toBeGreaterThan(0);
});

test("a cut takes its calls and its time away; what lies on both sides of it is not one run", () => {
  const stretch = stretchOf(101, [20, 21, 59, 70]);
  expect(minutesOf(outcome(stretch))).toEqual([21]);
  const cut = withoutCuts(stretch, [{ from: 60 * minute, to: 70 * minute }]); // 59 and 70 are neighbours now
  expect(cut.time.length).toBe(91);
  const seen = outcome(cut);
  expect(minutesOf(seen)).toEqual([21]);
  expect(seen.days).toBeCloseTo((59 + 30) / 1440, 10);
  expect(minutesOf(outcome(withoutCuts(stretch, [{ from: 15 * minute, to: 25 * minute }])))).toEqual([]);
});

test("nobody knows what happened in a gap: its time is not counted, and no quiet time goes across it", () => {
  const gapped = outcome(stretchOf(101, [29, 30], [30])); // 29 | 30: the run begins anew
  expect(gapped.annunciations).toBe(0);
  expect(gapped.days).toBeCloseTo((29 + 70) / 1440, 10);
  expect(gapped.longestQuietMs).toBe(70 * minute);
});

test("best are the choices that no other beats in both calls and missed events; of equal ones the first", () => {
  const cell = (x: number, perDay: number, missed: number): SweepCell => ({
    ...{ x, y: 0, perDay, missed, causeless: 0, lateMs: 0 },
  });
  const cells = [cell(0, 9, 0), cell(1, 5, 0), cell(2, 5, 0), cell(3, 6, 1), cell(4, 2, 1), cell(5, 2, 2)];
  expect(bestOf(cells).map(({ x }) => x)).toEqual([1, 4]);
});

test("one setting is changed and nothing else; the limits given stay as they are", () => {
  const before = structuredClone(limits);
  const fixed = withSetting(limits, { statistic: "q" }, 3, noLimit);
  expect(fixed.statistics).toEqual({ ...limits.statistics, q: { method: "fixed", limit: 3 } });
  const sure = withSetting(limits, { confidenceOf: "q" }, 0.99, (name, confidence) =>
    name === "q" ? confidence * 10 : 0,
  );
  expect(sure.statistics.q).toEqual({ method: "box", confidence: 0.99, limit: 9.9 });
  const delay = { alarm: "unfamiliar", number: "onDelay.readings" } as const;
  const later = withSetting(limits, delay, 5, noLimit);
  expect([settingOf(limits, delay), settingOf(later, delay)]).toEqual([2, 5]);
  expect(later.statistics).toBe(limits.statistics);
  expect(withSetting(limits, { alarm: "unfamiliar", number: "periods" }, 5, noLimit)).toEqual(limits);
  expect(limits).toEqual(before);
});

test("more readings in a row than were looked at leave no k of n", () => {
  const among = { ...limits, alarms: [unfamiliarAlarm({ onDelay: { readings: 2, of: 4 } })] };
  const delay = { alarm: "unfamiliar", number: "onDelay.readings" } as const;
  expect(withSetting(among, delay, 3, noLimit).alarms[0].onDelay).toEqual({ readings: 3, of: 4 });
  expect(withSetting(among, delay, 6, noLimit).alarms[0].onDelay).toEqual({ readings: 6 });
});
