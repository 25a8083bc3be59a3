import { describe, expect, test } from "vitest";
import { type AlarmEvent, type AlarmState, advance, stateWord } from "../../../core/alarms/index.ts";

const raise: AlarmEvent = { kind: "raise", at: 1000, since: 400, says: "Q 3.4 × limit", limitSet: 2 };
const clear: AlarmEvent = { kind: "clear", at: 2000 };
const acknowledge: AlarmEvent = { kind: "acknowledge", at: 1500, by: "R. Quill" };

function after(...events: AlarmEvent[]): AlarmState | undefined {
  return events.reduce<AlarmState | undefined>((state, event) => advance(state, event)[0], undefined);
}

const states = {
  normal: after(),
  unacknowledged: after(raise),
  acknowledged: after(raise, acknowledge),
  "returned unacknowledged": after(raise, clear),
};
type Word = keyof typeof states;

// States A–D and their transitions: ISA-18.2-2016 / IEC 62682:2022 (letters and names from memory).
const table: [from: Word, event: AlarmEvent, to: Word, records: string[]][] = [
  ["normal", raise, "unacknowledged", ["raised"]],
  ["normal", clear, "normal", []],
  ["normal", acknowledge, "normal", ["rejected"]],
  ["unacknowledged", raise, "unacknowledged", []],
  ["unacknowledged", clear, "returned unacknowledged", ["cleared"]],
  ["unacknowledged", acknowledge, "acknowledged", ["acknowledged"]],
  ["acknowledged", raise, "acknowledged", []],
  ["acknowledged", clear, "normal", ["cleared"]],
  ["acknowledged", acknowledge, "acknowledged", ["rejected"]],
  ["returned unacknowledged", raise, "unacknowledged", ["raised again"]],
  ["returned unacknowledged", clear, "returned unacknowledged", []],
  ["returned unacknowledged", acknowledge, "normal", ["acknowledged"]],
];

describe("the lifecycle of an alarm", () => {
  test.each(table)("%s, then $1.kind: $2", (from, event, to, records) => {
    const before = states[from];
    const copy = structuredClone(before);
    const [next, written] = advance(before, event);
    expect(stateWord(next)).toBe(to);
    expect(written.map(({ kind }) => kind)).toEqual(records);
    expect(before).toEqual(copy);
  });

  test("the table has every pair of state and event", () => {
    const pairs = new Set(table.map(([from, event]) => `${from} ${event.kind}`));
    expect(pairs.size).toBe(Object.keys(states).length * 3);
  });

  test("the words of the states are those that the states have", () => {
    for (const [word, state] of Object.entries(states)) expect(stateWord(state)).toBe(word);
  });

  test("an acknowledgement keeps who gave it and when, and a second one names the first", () => {
    expect(states.acknowledged).toMatchObject({ acknowledgedBy: "R. Quill", acknowledgedAt: 1500 });
    const [, [record]] = advance(states.acknowledged, { ...acknowledge, by: "A. Thorne" });
    expect(record).toMatchObject({ kind: "rejected", why: "already acknowledged by R. Quill" });
  });
});
