import { describe, expect, test } from "vitest";
import { plantTime } from "../../../core/words/index.ts";
import { account, alarmEvent, begin, event, hour, minute, record, setAside, shift } from "./some-record.ts";

const says = (made: ReturnType<typeof record>) => made.lead.map(({ weight, says }) => `${weight}: ${says}`);
const ms = { inside: 12 * hour, unfamiliar: 0, extrapolated: 0, sparse: 0, unusable: 0, "no data": 0 };
const excursion = {
  ...{ id: "s-1/unfamiliar/1", stream: "s-1", kind: "unfamiliar", start: begin + hour, peak: 3.41, unit: "× limit" },
  ...{ peakTime: begin + hour + 4 * minute, mean: 2, readings: 60, says: "1 724–1 768 nm gives 81 % of Q." },
};

describe("what matters most comes first", () => {
  test("a quiet shift is told in one sentence", () => {
    const made = record();
    expect(says(made)).toEqual([
      "fine: A quiet shift. Nothing is open; no alarms, no excursions, no changes, no gaps.",
    ]);
    expect(made.streams[0].says).toBe(
      "Inside all the time. Ethanol 91.2\u2009wt% on average, 89.9 to 93.1; target 88 to 94.5: never outside. The shift before: inside 100\u2009%, ethanol 91.2\u2009wt%.",
    );
  });

  test("open alarms before what is set aside, before what came and went", () => {
    const shelved = { at: begin, until: begin + 14 * hour, by: "A. Moss", reason: "probe is being cleaned" };
    const made = record({
      alarmEvents: [
        alarmEvent(begin + hour, "raised", { key: "low", title: "Water low", priority: "low" }),
        alarmEvent(begin + 2 * hour, "raised", { since: begin + 2 * hour }),
        event(begin + 3 * hour, "alarm shelved", { stream: "s-1", setAside: setAside({ shelved }) }),
      ],
      excursions: [{ ...excursion, end: begin + 2 * hour, ended: "returned" }],
    });
    expect(says(made)).toEqual([
      "act: Column overhead: Unfamiliar spectrum (high), since 08:00, unacknowledged. Take a sample.",
      "act: Column overhead: Water low (low), since 06:59, unacknowledged. Take a sample.",
      "know: Column overhead: Analyzer silent is shelved until 20:00: probe is being cleaned (A. Moss).",
      "know: 2 alarms, the highest of priority high; 2 never acknowledged, 2 standing.",
      "know: 1 excursion came and went.",
    ]);
  });

  test("a stream that has gone silent asks for somebody", () => {
    const gaps: [number, number][] = [[begin + 11 * hour, shift.to]];
    const streams = [
      {
        ...{ stream: "s-1", name: "Column overhead", before: null, trend: null },
        account: account({ gaps, ms: { ...ms, inside: 11 * hour, "no data": hour } }),
      },
    ];
    const made = record({ streams });
    expect(says(made)[0]).toBe("act: Column overhead: no data since 17:00. Watch the process by other means.");
    expect(made.streams[0].says).toMatch(/^Inside 92\u2009% of the time; no data 8\.3\u2009% \(1 h\)\./);
  });

  test("checks that nobody has ticked, and an action past its time, are said", () => {
    const action = { kind: "action" as const, says: "Empty drum 4", owner: "Birch", due: begin + hour };
    const made = record({
      checks: [
        { key: "probe", says: "Probe windows looked at" },
        { key: "night", says: "Yard lights on", shifts: ["Night"] },
      ],
      actions: [{ action: { ...action, number: 4, at: begin, by: "A. Moss", shift: begin }, closed: undefined }],
    });
    expect(says(made)).toEqual([
      "act: Overdue since 07:00: Empty drum 4 (Birch).",
      "act: 1 required check not done: Probe windows looked at.",
      "know: 1 action open for the next shift.",
    ]);
  });

  test("a shift without any data says so, stream by stream", () => {
    const empty = account({
      readings: 0,
      ms: { ...ms, inside: 0, "no data": 12 * hour },
      gaps: [[begin, shift.to]],
      properties: [],
    });
    const made = record({
      streams: [{ stream: "s-1", name: "Column overhead", account: empty, before: null, trend: null }],
    });
    expect(made.streams[0].says).toBe("No readings in this shift.");
    expect(says(made)[0]).toBe("act: Column overhead: no data since 06:00. Watch the process by other means.");
  });

  test("a clock that was set back is told, with by how much", () => {
    const made = record({
      events: [event(begin + 2 * hour, "service started"), event(begin + hour, "handover note", { by: "A. Moss" })],
    });
    expect(made.clockSteps).toEqual([{ at: begin + hour, backMs: hour }]);
    expect(says(made)).toContain(
      "know: The server's clock was set back by 1 h to 07:00: times before and after overlap.",
    );
  });
});

describe("what stood open at the end", () => {
  test("is told as of the end: an excursion that ended later was open then, and one that was over is not", () => {
    const later = { ...excursion, end: shift.to + hour, ended: "returned" as const };
    expect(record({ excursions: [later] }).open.excursions).toEqual([excursion]);
    expect(record({ excursions: [{ ...later, end: begin + 2 * hour }] }).open.excursions).toEqual([]);
  });

  test("an alarm of long before that still stands, and one that was set aside long before and returned since", () => {
    const outOfService = { at: begin - 500 * hour, by: "E. Holt", reason: "lamp away" };
    const old = setAside({ state: "out of service", outOfService });
    const before = [
      alarmEvent(begin - 200 * hour, "raised"),
      event(begin - 500 * hour, "alarm taken out of service", { stream: "s-1", setAside: old }),
    ];
    expect(record({ alarmEvents: before }).open).toMatchObject({
      alarms: [{ key: "unfamiliar" }],
      setAside: [{ key: "silent" }],
    });
    const after = [
      ...before,
      alarmEvent(begin + hour, "cleared", { state: "normal" }),
      event(begin + hour, "alarm returned to service", { stream: "s-1", setAside: old }),
    ];
    expect(record({ alarmEvents: after }).open).toMatchObject({ alarms: [], setAside: [] });
  });

  test("in recorded history nobody could answer: what has returned there is not handed over", () => {
    const history = [
      alarmEvent(begin, "raised"),
      alarmEvent(begin + minute, "cleared", { state: "returned unacknowledged" }),
    ];
    expect(record({ alarmEvents: history }).open.alarms).toHaveLength(1);
    expect(record({ alarmEvents: history.map((each) => ({ ...each, history: true })) }).open.alarms).toEqual([]);
  });
});

/**
 * The parts of a good handover, each with where the record has it. Source: UK HSE, guidance on shift handover and on what a handover covers
 * (human-factors pages; the content list that followed Buncefield), Lardner, OTO 96/003, by the field notes of this project; structure only.
 */
describe("every part that published guidance names is in the record", () => {
  const outOfService = { at: begin, by: "E. Holt", reason: "lamp away for repair" };
  const entry = { number: 1, shift: begin, at: begin + hour, by: "A. Moss" };
  const note = { ...entry, kind: "note" as const, about: { kind: "shift" as const }, says: "Drum 4 leaks a little." };
  const action = { ...entry, number: 2, kind: "action" as const, says: "Empty drum 4", owner: "Birch", due: shift.to };
  const check = { ...entry, number: 3, kind: "check" as const, check: "probe", outcome: "done" as const };
  const made = record({
    streams: [
      {
        ...{ stream: "s-1", name: "Column overhead", before: account(), trend: null },
        account: account({ gaps: [[begin + hour, begin + hour + minute]] }),
        process: { state: "running", grade: "E-92", since: begin },
      },
    ],
    alarmEvents: [
      alarmEvent(begin + hour, "raised"),
      event(begin + 2 * hour, "alarm taken out of service", { stream: "s-1", setAside: setAside({ outOfService }) }),
    ],
    excursions: [{ ...excursion, label: { is: "process change", by: "A. Moss", at: begin + 2 * hour } }],
    events: [
      event(begin + hour, "limits in force", {
        stream: "s-1",
        by: "E. Holt",
        says: "Version 4: Q limit 1.2e-5. Tighter after cleaning.",
      }),
      event(begin + hour, "process state", { stream: "s-1", says: "The process is running, grade E-92." }),
      event(begin + hour, "service started"),
      event(begin + hour, "broker lost"),
    ],
    refused: [{ stream: "s-1", reason: "malformed", says: "no JSON", count: 3, first: begin, last: begin + hour }],
    laboratory: [
      {
        stream: "s-1",
        property: "ethanol",
        unit: "wt%",
        at: begin,
        laboratory: 90,
        predicted: 91,
        says: "1 wt% apart.",
        disagrees: true,
      },
    ],
    entries: [note, check],
    actions: [{ action, closed: undefined }],
    checks: [{ key: "probe", says: "Probe windows looked at" }],
  });
  test.each<[string, unknown, unknown]>([
    [
      "area and period",
      [made.plant, made.shift],
      ["Quiet Quay", { name: "Day", team: "Amber", from: begin, to: shift.to }],
    ],
    ["state of each stream", made.streams[0], { says: expect.stringMatching(/^Inside/) }],
    ["grade, and what the line does", made.streams[0].process, { state: "running", grade: "E-92" }],
    ["what was abnormal: excursions with cause", made.excursions[0], { peak: 3.41, label: { is: "process change" } }],
    [
      "alarms with cause and action",
      made.alarms.list[0],
      { cause: "Something new in the line", response: "Take a sample." },
    ],
    ["alarms still open", made.open.alarms[0], { key: "unfamiliar", state: "unacknowledged" }],
    ["repeated faults have a count", made.alarms.list[0], { count: 1 }],
    ["what is defeated, with reason, since and until", made.open.setAside[0], { outOfService }],
    ["instruments without data", made.streams[0].account.gaps, [[begin + hour, begin + hour + minute]]],
    [
      "checks due and done, by whom",
      made.checks[0],
      { says: "Probe windows looked at", entry: { by: "A. Moss", outcome: "done" } },
    ],
    [
      "samples and disagreements with the laboratory",
      made.laboratory[0],
      { disagrees: true, laboratory: 90, predicted: 91 },
    ],
    [
      "changes with who and why",
      made.changes[0],
      { by: "E. Holt", says: expect.stringContaining("Tighter after cleaning") },
    ],
    ["changes of the process", made.process[0], { says: "The process is running, grade E-92." }],
    ["what could not be used", made.refused[0], { reason: "malformed", count: 3 }],
    ["the service's own events", made.service.map(({ kind }) => kind), ["service started", "broker lost"]],
    [
      "open work carries forward, with owner and time",
      made.actions[0],
      { owner: "Birch", due: shift.to, closed: null },
    ],
    [
      "free notes, with who and when",
      made.notes[0],
      { says: "Drum 4 leaks a little.", by: "A. Moss", at: begin + hour },
    ],
    ["the most important first", made.lead[0], { weight: "act" }],
  ])("%s", (_, found, expected) => {
    expect(found).toMatchObject(expected as object);
  });

  test("and no list hides a number of things", () => {
    const many = Array.from({ length: 60 }, (_, i) => ({
      ...excursion,
      id: `s-1/unfamiliar/${i}`,
      start: begin + i * minute,
    }));
    expect(record({ excursions: many }).excursions).toHaveLength(60);
  });
});

test("words of a time are in the plant's zone, whatever the machine's", () => {
  expect(plantTime("Europe/Oslo").brief(begin, begin)).toBe("06:00");
});
