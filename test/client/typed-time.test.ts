import { expect, test } from "vitest";
import { plantTime } from "../../client/words/plant-time.ts";
import { typedTime } from "../../client/words/typed-time.ts";

const oslo = plantTime("Europe/Oslo");
const now = Date.UTC(2026, 6, 1, 12, 30, 15); // 14:30:15 there

test.each([
  ["2026-07-01 14:05", "2026-07-01T12:05:00Z"],
  ["2026-07-01T14:05:09", "2026-07-01T12:05:09Z"],
  [" 2026-12-01 ", "2026-11-30T23:00:00Z"],
  ["9:05", "2026-07-01T07:05:00Z"],
  ["now", "2026-07-01T12:30:15Z"],
])("%j is read by the plant's clock: %s", (text, expected) => {
  expect(typedTime(text, oslo, now)).toBe(Date.parse(expected));
});

test.each(["", "yesterday", "2026-02-30 10:00", "2026-13-01", "24:00", "12:60", "1.12.2026", "14:05 x"])(
  "%j is no time",
  (text) => {
    expect(typedTime(text, oslo, now)).toBeUndefined();
  },
);

// Directive 2000/84/EC: clocks go from 02:00 to 03:00 on the last Sunday of March, and back from 03:00 to 02:00 on October's.
test("an hour that the clocks leave out is no time; of one that comes twice it is the first", () => {
  expect(typedTime("2026-03-29 02:30", oslo, now)).toBeUndefined();
  expect(typedTime("2026-03-29 03:30", oslo, now)).toBe(Date.parse("2026-03-29T01:30:00Z"));
  expect(typedTime("2026-10-25 02:30", oslo, now)).toBe(Date.parse("2026-10-25T00:30:00Z"));
  expect(typedTime("2026-10-25 03:30", oslo, now)).toBe(Date.parse("2026-10-25T02:30:00Z"));
});
