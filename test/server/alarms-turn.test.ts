import { describe, expect, test } from "vitest";
import { freshState } from "../../core/judging/index.ts";
import { excursionLabels } from "../../core/messages/index.ts";
import type { StreamCommand } from "../../server/engine/stream-command.ts";
import { topicsOf } from "../../server/engine/topics.ts";
import { type Context, type Input, takeTurn } from "../../server/engine/turn.ts";
import { SmallStream, smallRules, spectrum, unfamiliarAlarm } from "../core/judging/small-stream.ts";

const start = Date.UTC(2026, 5, 1);
const rules = smallRules([unfamiliarAlarm({ suppressedIn: ["cleaning"] })]);
const { random } = new SmallStream(rules);
const context: Context = {
  topics: topicsOf("millrace", "works"),
  approval: false,
  handover: {
    book: { entries: () => [], entry: () => undefined, closing: () => undefined, lastAt: () => 0 },
    checks: [],
  },
  isRecorded: () => false,
  excursion: () => undefined,
  readingsBetween: () => [],
  labResult: () => undefined,
};
let id = 0;
const command = (asked: StreamCommand): Input => ({ kind: "command", id: ++id, now: start, command: asked });
const message = (what: string, body: object): Input => {
  const payload = Buffer.from(JSON.stringify(body));
  return { kind: "message", message: { topic: `millrace/works/small/${what}`, payload, receivedAt: start } };
};
/** a reading that the calibration never saw */
const strange = (n: number) =>
  message("reading", {
    time: start - 60_000 + n * 1000,
    sequence: n,
    values: Array.from(spectrum(random, { foreign: 0.3 })),
  });
const turn = (...inputs: Input[]) =>
  takeTurn(inputs, { streams: new Map([["small", { rules, state: freshState }]]), cursor: 0 }, context);
const to = { stream: "small", key: "unfamiliar", by: "A. Thorne" };

describe("one turn of the engine", () => {
  test("takes readings, process states and commands in the order in which they came", () => {
    const { changes, replies, streams } = turn(
      ...[strange(1), strange(2), strange(3)],
      command({ kind: "acknowledge", ...to }),
      command({ kind: "take out of service", ...to, reason: "probe is away" }),
      message("state", { time: start - 10_000, state: "cleaning" }),
      command({ kind: "return to service", ...to }),
      command({ kind: "reset", ...to }),
    );
    expect(replies.map(({ outcome }) => outcome.done)).toEqual([true, true, true, false]);
    expect(changes.events.map(({ kind }) => kind)).toEqual([
      "excursion began",
      "alarm raised",
      "alarm acknowledged",
      "alarm taken out of service",
      "process state",
      "alarm suppressed",
      "alarm returned to service",
      "command rejected",
    ]);
    expect(changes.events.map(({ cursor }) => cursor)).toEqual([1, 2, 3, 4, 5, 6, 7, 8]);
    // Out of service is over, the process is cleaning still: nobody is called.
    expect(changes.states.get("small")).toBe(streams.get("small")!.state);
    expect(streams.get("small")!.state.alarms.unfamiliar).toMatchObject({ active: true, standing: "normal" });
  });

  test("labels an excursion that began within it", () => {
    const label = { kind: "label excursion" as const, stream: "small", excursion: "unfamiliar", by: "A. Thorne" };
    const { changes, replies } = turn(
      ...[strange(1), strange(2)],
      command({ ...label, start: start - 59_000, label: excursionLabels[0] }),
      strange(3),
    );
    expect(replies.at(-1)!.outcome).toEqual({ done: true });
    expect(changes.excursions.at(-1)).toMatchObject({ readings: 3, label: { is: "process change", at: start } });
  });

  test("a process state of a stream that is none is refused", () => {
    const { changes } = turn({
      kind: "message",
      message: { topic: "millrace/works/other/state", payload: Buffer.from("{}"), receivedAt: start },
    });
    expect(changes.refusals).toMatchObject([{ stream: null, reason: "unknown stream" }]);
  });

  test.each([
    ["no JSON", "nonsense", /^process state: the payload begins with byte 0x6e/],
    ["a list", "[1]", /^process state: the payload begins with byte 0x5b/],
    ["no state", '{"time":"2026-06-01T00:00:00Z"}', /^process state: state is missing/],
    ["a state that is no word", '{"time":"2026-06-01T00:00:00Z","state":7}', /^process state: state is 7/],
    ["a time without its zone", '{"time":"2026-06-01T00:00:00","state":"running"}', /^process state: time is "2026/],
    ["far too much", `{"grade":"${"x".repeat(20_000)}"}`, /^process state: 20012 bytes, at most 16384/],
  ])("a process state with %s is refused with its reason", (_, text, says) => {
    const { changes, streams } = turn({
      kind: "message",
      message: { topic: "millrace/works/small/state", payload: Buffer.from(text), receivedAt: start },
    });
    expect(changes.refusals).toMatchObject([
      { stream: "small", reason: "malformed", says: expect.stringMatching(says) },
    ]);
    expect(streams.get("small")!.state.process).toBeNull();
  });
});
