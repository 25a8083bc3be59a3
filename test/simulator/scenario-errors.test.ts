import { describe, expect, test } from "vitest";
import { builtInScenarios, parseScenario, ScenarioError } from "../../simulator/scenario/index.ts";

const event = { kind: "fouling", stream: "bq-410", startSeconds: 10, durationSeconds: 60 };
const withEvent = (change: object) => JSON.stringify({ ...builtInScenarios.calm, events: [{ ...event, ...change }] });

describe("a scenario file", () => {
  test.each(Object.entries(builtInScenarios))(
    "the built-in %s can be written to a file and read again",
    (_, scenario) => {
      expect(parseScenario(JSON.stringify(scenario), "s.json")).toEqual(scenario);
    },
  );

  test.each([
    ["no JSON", "{", "", /not JSON .*expected a JSON object/],
    ["not an object", "[]", "", /s\.json/],
    [
      "another format",
      JSON.stringify({ ...builtInScenarios.calm, format: "x" }),
      "format",
      /"x", expected "millrace-scenario"/,
    ],
    [
      "a kind that is none",
      withEvent({ kind: "bubbel" }),
      "events[0].kind",
      /"bubbel", expected one of co-solvent, .*bubble/,
    ],
    ["a stream that is none", withEvent({ stream: "bq-999" }), "events[0].stream", /"bq-999", expected one of bq-201/],
    ["a start before the run", withEvent({ startSeconds: -1 }), "events[0].startSeconds", /is -1, expected to be >= 0/],
    [
      "a start in words",
      withEvent({ startSeconds: "soon" }),
      "events[0].startSeconds",
      /"soon", expected to be number/,
    ],
    ["a field that is none", withEvent({ colour: 1 }), "events[0].colour", /is 1, expected no field of that name/],
    [
      "no duration",
      withEvent({ durationSeconds: undefined }),
      "events[0].durationSeconds",
      /missing, expected a number of seconds for fouling/,
    ],
    ["a bubble with a duration", withEvent({ kind: "bubble" }), "events[0].durationSeconds", /is 60, expected nothing/],
  ])("with %s is refused, naming file, field, what was got and expected", (_, text, field, says) => {
    let thrown: unknown;
    try {
      parseScenario(text, "s.json");
    } catch (error) {
      thrown = error;
    }
    expect(thrown).toBeInstanceOf(ScenarioError);
    const error = thrown as ScenarioError;
    expect(error.field).toBe(field);
    expect(error.message).toMatch(says);
    expect(error.message).toMatch(/^s\.json: /);
    expect(error.message).toMatch(/Mend the file/);
  });
});
