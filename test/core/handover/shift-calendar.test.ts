import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { calendarDays, type ShiftPlan, shiftCalendar } from "../../../core/handover/index.ts";
import { runs } from "../runs.ts";

const twoByTwelve: ShiftPlan = {
  shifts: [
    { name: "Day", from: "06:00", to: "18:00" },
    { name: "Night", from: "18:00", to: "06:00" },
  ],
};
const threeByEight: ShiftPlan = {
  shifts: [
    { name: "Early", from: "06:00", to: "14:00" },
    { name: "Late", from: "14:00", to: "22:00" },
    { name: "Night", from: "22:00", to: "06:00" },
  ],
};
const officeHours: ShiftPlan = {
  shifts: [
    { name: "Weekday", from: "07:30", to: "16:00", days: ["monday", "tuesday", "wednesday", "thursday", "friday"] },
  ],
};
const hour = 3_600_000;
const utc = (text: string) => Date.parse(`${text}Z`);

/** What Node's own IANA data shows on the wall at a moment: an account that owes nothing to the calendar's library. */
function wall(at: number, timeZone: string): string {
  return new Intl.DateTimeFormat("sv-SE", { timeZone, dateStyle: "short", timeStyle: "short" }).format(at);
}

// Source: IANA time zone data (tzdb), as Node carries it; the hours in UTC are the changes that it lists for these days.
describe("a shift lasts as long as the clock on the wall has its times", () => {
  test.each([
    ["Europe/Oslo", "an ordinary night", threeByEight, "2026-02-10T02:00", 8, "2026-02-09 22:00", "2026-02-10 06:00"],
    [
      "Europe/Oslo",
      "put forward 29 March 2026",
      threeByEight,
      "2026-03-29T00:30",
      7,
      "2026-03-28 22:00",
      "2026-03-29 06:00",
    ],
    [
      "Europe/Oslo",
      "put back 25 October 2026",
      threeByEight,
      "2026-10-25T00:30",
      9,
      "2026-10-24 22:00",
      "2026-10-25 06:00",
    ],
    ["Europe/Oslo", "12 h put forward", twoByTwelve, "2026-03-29T00:30", 11, "2026-03-28 18:00", "2026-03-29 06:00"],
    ["Europe/Oslo", "12 h put back", twoByTwelve, "2026-10-25T00:30", 13, "2026-10-24 18:00", "2026-10-25 06:00"],
    [
      "America/New_York",
      "put forward 8 March 2026",
      threeByEight,
      "2026-03-08T06:00",
      7,
      "2026-03-07 22:00",
      "2026-03-08 06:00",
    ],
    [
      "America/New_York",
      "put back 1 November 2026",
      threeByEight,
      "2026-11-01T06:00",
      9,
      "2026-10-31 22:00",
      "2026-11-01 06:00",
    ],
    [
      "Australia/Lord_Howe",
      "half an hour, put back 5 April 2026",
      threeByEight,
      "2026-04-04T15:00",
      8.5,
      "2026-04-04 22:00",
      "2026-04-05 06:00",
    ],
    ["Asia/Kolkata", "no change at all", twoByTwelve, "2026-03-29T00:30", 12, "2026-03-29 06:00", "2026-03-29 18:00"],
    [
      "Africa/Cairo",
      "the day begins at one o'clock, 24 April 2026",
      calendarDays,
      "2026-04-24T10:00",
      23,
      "2026-04-24 01:00",
      "2026-04-25 00:00",
    ],
    [
      "Pacific/Apia",
      "30 December 2011 left out",
      twoByTwelve,
      "2011-12-30T09:00",
      6,
      "2011-12-29 18:00",
      "2011-12-31 00:00",
    ],
  ] as const)("%s, %s", (timeZone, _, plan, at, hours, begins, ends) => {
    const { from, to } = shiftCalendar(plan, timeZone).at(utc(at));
    expect([(to - from) / hour, wall(from, timeZone), wall(to, timeZone)]).toEqual([hours, begins, ends]);
  });

  test("a beginning that the clock leaves out is the moment of the change, and its neighbours meet there", () => {
    const plan: ShiftPlan = {
      shifts: [
        { name: "A", from: "02:15", to: "03:00" },
        { name: "B", from: "03:00", to: "12:00" },
        { name: "C", from: "12:00", to: "02:15" },
      ],
    };
    const calendar = shiftCalendar(plan, "Europe/Oslo");
    const change = utc("2026-03-29T01:00");
    expect(calendar.at(change)).toEqual({ from: change, to: utc("2026-03-29T10:00"), name: "B", staffed: true });
    expect(calendar.at(change - 1)).toMatchObject({ to: change, name: "C" });
  });

  test("a beginning that the clock shows twice is the first of the two", () => {
    const plan: ShiftPlan = { shifts: [{ name: "A", from: "02:30", to: "02:30" }] };
    expect(shiftCalendar(plan, "Europe/Oslo").at(utc("2026-10-25T12:00")).from).toBe(utc("2026-10-25T00:30"));
  });
});

describe("every moment lies in exactly one shift", () => {
  const zones = ["Europe/Oslo", "America/New_York", "Australia/Lord_Howe", "Asia/Kolkata", "America/Santiago", "UTC"];
  test.each([twoByTwelve, threeByEight, officeHours, calendarDays])("plan %#", (plan) => {
    const moment = fc.integer({ min: utc("2005-01-01T00:00"), max: utc("2037-01-01T00:00") });
    fc.assert(
      fc.property(moment, fc.constantFrom(...zones), (time, zone) => {
        const calendar = shiftCalendar(plan, zone);
        const shift = calendar.at(time);
        expect(shift.from).toBeLessThanOrEqual(time);
        expect(shift.to).toBeGreaterThan(time);
        expect(calendar.at(shift.from)).toEqual(shift);
        expect(calendar.at(shift.to - 1)).toEqual(shift);
        expect(calendar.before(shift).to).toBe(shift.from);
        expect(calendar.after(shift).from).toBe(shift.to);
      }),
      { numRuns: runs(60) },
    );
  });
});

describe("whose shift it is", () => {
  const rotating: ShiftPlan = {
    shifts: [
      { name: "Day", from: "06:00", to: "18:00", teams: ["Amber", "Amber", "Birch", "Birch", "Cedar", "Cedar"] },
      { name: "Night", from: "18:00", to: "06:00", teams: ["Cedar", "Cedar", "Amber", "Amber", "Birch", "Birch"] },
    ],
    rotationFrom: "2026-01-05",
  };
  const calendar = shiftCalendar(rotating, "UTC");
  test.each([
    ["2026-01-05T07:00", "Day", "Amber"],
    ["2026-01-06T19:00", "Night", "Cedar"],
    ["2026-01-07T05:59", "Night", "Cedar"], // the night belongs to the day on which it began
    ["2026-01-07T06:00", "Day", "Birch"],
    ["2026-01-11T12:00", "Day", "Amber"], // six days later, over again
    ["2026-01-04T12:00", "Day", "Cedar"], // and backwards
  ])("at %s: %s, %s", (at, name, team) => {
    expect(calendar.at(utc(at))).toMatchObject({ name, team });
  });

  test("a weekly calendar: what lies between its shifts is a stretch of its own, from Friday to Monday", () => {
    const weekend = shiftCalendar(officeHours, "Europe/Oslo").at(utc("2026-05-16T12:00"));
    expect(weekend).toEqual({
      from: utc("2026-05-15T14:00"),
      to: utc("2026-05-18T05:30"),
      name: "No shift",
      staffed: false,
    });
  });
});

describe("a plan that cannot be kept is refused with what to mend", () => {
  const day = { name: "Day", from: "06:00", to: "18:30" };
  const night = { name: "Night", from: "18:00", to: "06:00" };
  test.each<[string, ShiftPlan, string, RegExp]>([
    ["overlap", { shifts: [day, night] }, "UTC", /Day \(to 18:30\) and Night \(from 18:00\) overlap on monday/],
    ["one that overlaps itself", { shifts: [night, night] }, "UTC", /Night .* Night .* overlap/],
    [
      "overlap over the week's end",
      {
        shifts: [
          { ...night, days: ["sunday"] },
          { name: "Early", from: "05:00", to: "07:00", days: ["monday"] },
        ],
      },
      "UTC",
      /Night \(to 06:00\) and Early \(from 05:00\) overlap on monday/,
    ],
    ["no beginning of the rotation", { shifts: [{ ...night, teams: ["A", "B"] }] }, "UTC", /rotationFrom is missing/],
    [
      "a day that does not exist",
      { shifts: [night], rotationFrom: "2026-02-30" },
      "UTC",
      /"2026-02-30", expected a day that exists/,
    ],
    [
      "a zone that does not exist",
      { shifts: [night] },
      "Europe/Atlantis",
      /"Europe\/Atlantis", expected a zone of the IANA/,
    ],
  ])("%s", (_, plan, zone, says) => {
    expect(() => shiftCalendar(plan, zone)).toThrow(says);
  });
});
