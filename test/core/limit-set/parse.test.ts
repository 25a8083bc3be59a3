import { expect, test } from "vitest";
import { defaultAlarms, LimitSetError, parseAlarmRules } from "../../../core/limit-set/index.ts";

const file = { format: "millrace-alarm-rules", formatVersion: 1, author: "A. Thorne", reason: "first" };
const high = {
  ...defaultAlarms()[0],
  key: "water-high",
  watches: { kind: "property", property: "water", side: "high", limit: 11, deadband: 0.3 },
};

function parse(alarms: unknown[]) {
  return () => parseAlarmRules(JSON.stringify({ ...file, alarms }), "bq.alarms.json", ["water", "ethanol"]);
}

test("the default alarms are fit to be an alarm file", () => {
  expect(parse(defaultAlarms())().alarms).toEqual(defaultAlarms());
});

test.each<[string, unknown[], RegExp]>([
  [
    "a limit that is no number",
    [{ ...high, watches: { ...high.watches, limit: "11" } }],
    /^bq\.alarms\.json: alarms\[0\]\.watches/,
  ],
  [
    "an unknown property",
    [{ ...high, watches: { ...high.watches, property: "wafer" } }],
    /alarms\[0\]\.watches\.property is "wafer", expected one of "water", "ethanol"/,
  ],
  ["the same key twice", [high, high], /alarms\[1\]\.key is "water-high" again/],
  [
    "k of n with n below k",
    [{ ...high, onDelay: { readings: 3, of: 2 } }],
    /alarms\[0\]\.onDelay\.of is 2, expected at least 3/,
  ],
  [
    "an alarm without a response",
    [{ ...high, purpose: { ...high.purpose, response: " " } }],
    /alarms\[0\]\.purpose\.response is empty.*record only/s,
  ],
  ...(["cause", "consequence"] as const).map((name): [string, unknown[], RegExp] => [
    `an alarm without a ${name}`,
    [{ ...high, purpose: { ...high.purpose, [name]: "" } }],
    new RegExp(`alarms\\[0\\]\\.purpose\\.${name} is empty.*record only`, "s"),
  ]),
  [
    "an alarm that leaves no time to respond",
    [{ ...high, purpose: { ...high.purpose, timeToRespondMinutes: 0 } }],
    /alarms\[0\]\.purpose\.timeToRespondMinutes is 0, expected the minutes that are left to respond/,
  ],
  [
    "a drift without its time constant",
    [{ ...high, watches: { kind: "drifting", withinMinutes: 30, fromRatio: 0.5, deadband: 0 } }],
    /alarms\[0\]\.watches/,
  ],
  ["a shelf without end", [{ ...high, mostShelvedMinutes: 100_000 }], /alarms\[0\]\.mostShelvedMinutes is 100000/],
  ["a missing title", [{ ...high, title: undefined }], /alarms\[0\]\.title is missing/],
])("%s is refused by name", (_, alarms, expected) => {
  expect(parse(alarms)).toThrow(LimitSetError);
  expect(parse(alarms)).toThrow(expected);
});

test("what asks nobody to respond may be kept on record", () => {
  const quiet = { ...high, priority: "record only", purpose: { ...high.purpose, response: "" } };
  expect(parse([quiet])().alarms[0].priority).toBe("record only");
});

test("a file that is no JSON says so", () => {
  expect(() => parseAlarmRules("{", "x.json", [])).toThrow(/^x\.json is no JSON \(.*expected a JSON object/s);
});
