import { describe, expect, test } from "vitest";
import { adopt, openAlarms, type StreamState, setAsideAlarms } from "../../../core/judging/index.ts";
import type { AlarmRule } from "../../../core/limit-set/index.ts";
import { SmallStream, smallRules, unfamiliarAlarm } from "./small-stream.ts";

const recorded: Partial<AlarmRule> = { priority: "record only" };

/** A stream whose alarm was raised under one rule, taken up under another. */
function raisedThenAdopted(first: Partial<AlarmRule>, then: AlarmRule[], change = (state: StreamState) => state) {
  const stream = new SmallStream(smallRules([unfamiliarAlarm(first)]));
  for (const amounts of [{}, { foreign: 0.3 }, { foreign: 0.3 }, { foreign: 0.3 }]) stream.feed(amounts);
  const rules = smallRules(then);
  const [state, notes] = adopt(change(stream.state), stream.time, rules);
  return { state, notes, open: openAlarms(state, rules), aside: setAsideAlarms(state, rules) };
}

describe("a stream's state under a new limit set", () => {
  test("an alarm that stays keeps its state, and nothing goes on record", () => {
    const { open, notes } = raisedThenAdopted({}, [unfamiliarAlarm({ onDelay: { readings: 5 } })]);
    expect(open).toMatchObject([{ key: "unfamiliar", state: "unacknowledged" }]);
    expect(notes).toEqual([]);
  });

  test("one that is no more ends with a note that says what it was", () => {
    const { state, notes } = raisedThenAdopted({}, []);
    expect(state.alarms).toEqual({});
    expect(state.detectors).toEqual({});
    expect(notes).toMatchObject([{ kind: "alarm removed", key: "unfamiliar" }]);
    expect(notes[0].says).toContain("it was unacknowledged");
  });

  test("one that has become a record asks nobody any more", () => {
    const { state, open } = raisedThenAdopted({}, [unfamiliarAlarm(recorded)]);
    expect(open).toEqual([]);
    expect(state.alarms.unfamiliar).toMatchObject({ active: true, standing: "acknowledged" });
  });

  test("one that was a record and holds calls somebody: nobody has ever seen it", () => {
    const { open, notes } = raisedThenAdopted(recorded, [unfamiliarAlarm()]);
    expect(open).toMatchObject([{ key: "unfamiliar", state: "unacknowledged" }]);
    expect(notes).toMatchObject([{ kind: "alarm raised" }]);
  });

  test("what the process's state suppresses now is suppressed now", () => {
    const inCleaning = (state: StreamState) => ({ ...state, process: { state: "cleaning", since: 1 } });
    const { open, aside } = raisedThenAdopted({}, [unfamiliarAlarm({ suppressedIn: ["cleaning"] })], inCleaning);
    expect(open).toEqual([]);
    expect(aside).toMatchObject([{ key: "unfamiliar", state: "suppressed", active: true }]);
  });
});

test("a state as the first version kept it is taken up whole", () => {
  const alarm = {
    active: true,
    unacknowledged: false,
    since: 1,
    raisedAt: 2,
    says: "Q",
    limitSet: 1,
    acknowledgedAt: 3,
    acknowledgedBy: "R. Quill",
  };
  const excursion = {
    start: 1,
    last: 2,
    readings: 3,
    sum: 6,
    peak: 3,
    peakReach: 3,
    peakTime: 2,
    unit: "× limit",
    says: "here",
  };
  const { alarms: _, excursions: __, process: ___, drifts: ____, ...rest } = new SmallStream(smallRules([])).state;
  const old = {
    ...rest,
    alarms: { unfamiliar: alarm },
    excursions: { unfamiliar: excursion },
  } as unknown as StreamState;
  const rules = smallRules([unfamiliarAlarm()]);
  const [state, notes] = adopt(old, 10, rules);
  expect(openAlarms(state, rules)).toMatchObject([
    { key: "unfamiliar", state: "acknowledged", acknowledgedBy: "R. Quill", raisedAt: 2, says: "Q" },
  ]);
  expect(state).toMatchObject({
    process: null,
    drifts: {},
    excursions: { unfamiliar: { within: 0, made: [], alarms: [] } },
  });
  expect(notes).toEqual([]);
});
