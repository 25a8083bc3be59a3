import { describe, expect, test } from "vitest";
import {
  type AlarmEvent,
  type AlarmRecord,
  type AlarmState,
  advance,
  type LifecycleRules,
  stateWord,
} from "../../../core/alarms/index.ts";

const minute = 60_000;
const rules: LifecycleRules = { annunciates: true, latching: false, mostShelvedMs: 480 * minute };
const latching = { ...rules, latching: true };
const by = "R. Quill";

const raise: AlarmEvent = { kind: "raise", at: 1000, since: 400, says: "Q 3.4 × limit", limitSet: 2 };
const clear: AlarmEvent = { kind: "clear", at: 2000 };
const acknowledge: AlarmEvent = { kind: "acknowledge", at: 1500, by };
const reset: AlarmEvent = { kind: "reset", at: 2500, by };
const shelve: AlarmEvent = { kind: "shelve", at: 3000, by, reason: "being worked on", forMs: 30 * minute };
const once: AlarmEvent = { kind: "shelve", at: 3000, by, reason: "known" };
const unshelve: AlarmEvent = { kind: "unshelve", at: 3500, by };
const out: AlarmEvent = { kind: "take out of service", at: 4000, by, reason: "probe is away" };
const outUntil: AlarmEvent = { ...out, until: 60 * minute };
const back: AlarmEvent = { kind: "return to service", at: 4500, by };
const suppress: AlarmEvent = { kind: "suppress", at: 5000, state: "cleaning" };
const leave: AlarmEvent = { kind: "leave suppressing state", at: 6000, until: 60 * minute };
const processTime: AlarmEvent = { kind: "process time", at: 61 * minute };
const wallClock: AlarmEvent = { kind: "wall clock", at: 600 * minute };

/** The events that lead to a state, and the events of the table's columns; `*` under a latching rule. */
type Step = AlarmEvent | { latching: AlarmEvent };
const clearLatching: Step = { latching: clear };
const take = (state: AlarmState | undefined, step: Step) =>
  "latching" in step ? advance(state, step.latching, latching) : advance(state, step, rules);

const ways: Record<string, Step[]> = {
  A: [],
  B: [raise],
  C: [raise, acknowledge],
  D: [raise, clear],
  E: [raise, clearLatching],
  F: [raise, acknowledge, clearLatching],
  "G-": [shelve],
  "G+": [raise, shelve],
  "1+": [raise, once],
  "H-": [suppress],
  "H+": [raise, suppress],
  "h-": [suppress, leave],
  "h+": [raise, suppress, leave],
  "I-": [out],
  "I+": [raise, out],
  "i+": [raise, outUntil],
  "GH+": [raise, shelve, suppress],
  "GHI+": [raise, shelve, suppress, out],
};

const columns: [name: string, step: Step][] = [
  ["raise", raise],
  ["clear", clear],
  ["clear, latching", clearLatching],
  ["acknowledge", acknowledge],
  ["reset", reset],
  ["shelve", shelve],
  ["shelve once", once],
  ["unshelve", unshelve],
  ["take out of service", out],
  ["return to service", back],
  ["suppress", suppress],
  ["leave suppressing state", leave],
  ["process time passes", processTime],
  ["wall clock passes", wallClock],
];

/*
 * States and transitions of ISA-18.2-2016 / IEC 62682 (letters and names from memory). A normal · B unacknowledged · C acknowledged ·
 * D returned unacknowledged · E latched unacknowledged · F latched acknowledged · G shelved (1: once) · H suppressed by design (h: the
 * process has left the state, the suppression not yet run out) · I out of service (i: with a time of return). G, H and I overlap; + the
 * condition holds, − it does not. A cell: the state that follows and the records that are made; "." no change; "x …" rejected, and why.
 */
const raised = "B raised";
const again = "B raised again";
const anew = (word: string) => `B ${word}, annunciated anew`;
const unannounced = (state: string) => `${state} raised unannounced`;
const gone = (state: string) => `${state} cleared unannounced`;
const onShelf = (state: string) => `${state} shelved`;
const outside = (state: string) => `${state} taken out of service`;
const still = ".";
const table: Record<string, string[]> = {
  // biome-ignore format: a table
  A: [raised, still, still, "x none", "x none", onShelf("G-"), "x idle", "x unshelved", outside("I-"), "x serving", "H- suppressed", still, still, still],
  // biome-ignore format: a table
  B: [still, "D cleared", "E cleared", "C acknowledged", "x holds", onShelf("G+"), onShelf("1+"), "x unshelved", outside("I+"), "x serving", "H+ suppressed", still, still, still],
  // biome-ignore format: a table
  C: [still, "A cleared", "F cleared", "x seen", "x holds", onShelf("G+"), onShelf("1+"), "x unshelved", outside("I+"), "x serving", "H+ suppressed", still, still, still],
  // biome-ignore format: a table
  D: [again, still, still, "A acknowledged", "x none", onShelf("G-"), "x idle", "x unshelved", outside("I-"), "x serving", "H- suppressed", still, still, still],
  // biome-ignore format: a table
  E: [again, still, still, "F acknowledged", "x unseen", onShelf("G-"), "x idle", "x unshelved", outside("I-"), "x serving", "H- suppressed", still, still, still],
  // biome-ignore format: a table
  F: [again, still, still, "x seen", "A reset", onShelf("G-"), "x idle", "x unshelved", outside("I-"), "x serving", "H- suppressed", still, still, still],
  // biome-ignore format: a table
  "G-": [unannounced("G+"), still, still, "x aside", "x aside", "x twice", "x twice", "A unshelved", outside("GI-"), "x serving", "GH- suppressed", still, still, "A unshelved"],
  // biome-ignore format: a table
  "G+": [still, gone("G-"), gone("G-"), "x aside", "x aside", "x twice", "x twice", anew("unshelved"), outside("GI+"), "x serving", "GH+ suppressed", still, still, anew("unshelved")],
  // biome-ignore format: a table
  "1+": [still, "A cleared unannounced, unshelved", "A cleared unannounced, unshelved", "x aside", "x aside", "x twice", "x twice", anew("unshelved"), outside("1I+"), "x serving", "1H+ suppressed", still, still, anew("unshelved")],
  // biome-ignore format: a table
  "H-": [unannounced("H+"), still, still, "x aside", "x aside", onShelf("GH-"), "x idle", "x unshelved", outside("HI-"), "x serving", still, "h-", still, still],
  // biome-ignore format: a table
  "H+": [still, gone("H-"), gone("H-"), "x aside", "x aside", onShelf("GH+"), onShelf("1H+"), "x unshelved", outside("HI+"), "x serving", still, "h+", still, still],
  // biome-ignore format: a table
  "h-": [unannounced("h+"), still, still, "x aside", "x aside", onShelf("Gh-"), "x idle", "x unshelved", outside("hI-"), "x serving", "H-", still, "A suppression ended", still],
  // biome-ignore format: a table
  "h+": [still, gone("h-"), gone("h-"), "x aside", "x aside", onShelf("Gh+"), onShelf("1h+"), "x unshelved", outside("hI+"), "x serving", "H+", still, anew("suppression ended"), still],
  // biome-ignore format: a table
  "I-": [unannounced("I+"), still, still, "x aside", "x aside", onShelf("GI-"), "x idle", "x unshelved", "x twice", "A returned to service", "HI- suppressed", still, still, still],
  // biome-ignore format: a table
  "I+": [still, gone("I-"), gone("I-"), "x aside", "x aside", onShelf("GI+"), onShelf("1I+"), "x unshelved", "x twice", anew("returned to service"), "HI+ suppressed", still, still, still],
  // biome-ignore format: a table
  "i+": [still, gone("i-"), gone("i-"), "x aside", "x aside", onShelf("Gi+"), onShelf("1i+"), "x unshelved", "x twice", anew("returned to service"), "Hi+ suppressed", still, still, anew("returned to service")],
  // biome-ignore format: a table
  "GH+": [still, gone("GH-"), gone("GH-"), "x aside", "x aside", "x twice", "x twice", "H+ unshelved", outside("GHI+"), "x serving", still, "Gh+", still, "H+ unshelved"],
  // biome-ignore format: a table
  "GHI+": [still, gone("GHI-"), gone("GHI-"), "x aside", "x aside", "x twice", "x twice", "HI+ unshelved", "x twice", "GH+ returned to service", still, "GhI+", still, "HI+ unshelved"],
};

/** What is illegal, by name, and the words of its rejection. */
const whyNot: Record<string, RegExp> = {
  none: /^nothing to (acknowledge|reset)$/,
  seen: /^already acknowledged by R\. Quill$/,
  unseen: /^not acknowledged yet$/,
  holds: /^its condition still holds$/,
  aside: /^it is (shelved|suppressed|out of service) and annunciates nothing$/,
  idle: /^it is not active, so there is no activation to shelve; give a time$/,
  twice: /^already (shelved|taken out of service) by R\. Quill: /,
  unshelved: /^it is not shelved$/,
  serving: /^it is not out of service$/,
};

const letters = { B: "unacknowledged", C: "acknowledged", D: "returned unacknowledged" } as const;
const latchedLetters = { E: "latched unacknowledged", F: "latched acknowledged" } as const;

/** The state in the table's letters. */
function letterOf(state: AlarmState | undefined): string {
  if (!state) return "A";
  const { shelved, suppressed, outOfService, active, standing } = state;
  const flags =
    (shelved ? (shelved.once ? "1" : "G") : "") +
    (suppressed ? (suppressed.until === undefined ? "H" : "h") : "") +
    (outOfService ? (outOfService.until === undefined ? "I" : "i") : "");
  if (flags) return standing === "normal" ? `${flags}${active ? "+" : "-"}` : `${flags} standing ${standing}`;
  const [letter] = Object.entries({ ...letters, ...latchedLetters }).find(([, word]) => word === standing) ?? ["?"];
  return active === (letter === "B" || letter === "C") ? letter : `${letter} with active ${active}`;
}

function reach(way: Step[]): AlarmState | undefined {
  return way.reduce<AlarmState | undefined>((state, step) => take(state, step)[0], undefined);
}
const kinds = (records: AlarmRecord[]) => records.map(({ kind }) => kind).join(", ");

describe("every state and every event", () => {
  const pairs = Object.entries(table).flatMap(([from, cells]) =>
    columns.map(([name, step], i) => [from, name, cells[i], step] as const),
  );

  test.each(pairs)("%s, then %s: %s", (from, _, cell, step) => {
    const before = reach(ways[from]);
    const copy = structuredClone(before);
    const [after, records] = take(before, step);
    expect(before).toEqual(copy);
    if (cell.startsWith("x ")) {
      expect(after).toEqual(before);
      expect(records).toMatchObject([{ kind: "rejected", by, why: expect.stringMatching(whyNot[cell.slice(2)]) }]);
    } else {
      const expected = cell === "." ? [from, ""] : [cell.split(" ", 1)[0], cell.split(" ").slice(1).join(" ")];
      expect([letterOf(after), kinds(records)]).toEqual(expected);
    }
  });

  test("the table is whole", () => {
    expect(Object.keys(table)).toEqual(Object.keys(ways));
    for (const [state, cells] of Object.entries(table)) expect([state, cells.length]).toEqual([state, columns.length]);
    for (const [letter, way] of Object.entries(ways)) expect(letterOf(reach(way))).toBe(letter);
  });
});

describe("the lifecycle of an alarm", () => {
  test("the words of its states", () => {
    expect(["A", "B", "C", "D", "E", "F"].map((letter) => stateWord(reach(ways[letter])))).toEqual([
      "normal",
      "unacknowledged",
      "acknowledged",
      "returned unacknowledged",
      "latched unacknowledged",
      "latched acknowledged",
    ]);
    expect(["G+", "GH+", "GHI+"].map((letter) => stateWord(reach(ways[letter])))).toEqual([
      "shelved",
      "suppressed",
      "out of service",
    ]);
  });

  test("an acknowledgement keeps who gave it and when, and a second one names the first", () => {
    expect(reach(ways.C)).toMatchObject({ acknowledgedBy: "R. Quill", acknowledgedAt: 1500 });
    const [, [record]] = advance(reach(ways.C), { kind: "acknowledge", at: 1600, by: "A. Thorne" }, rules);
    expect(record).toMatchObject({ kind: "rejected", by: "A. Thorne", why: "already acknowledged by R. Quill" });
  });

  test("an acknowledgement does not outlive the activation that it was given for", () => {
    const [again] = advance(reach(ways.F), { ...raise, at: 9000 }, latching);
    expect(again).toMatchObject({ standing: "unacknowledged" });
    expect(again).not.toHaveProperty("acknowledgedBy");
  });

  test("an alarm that came and went unseen says how often it was annunciated", () => {
    const state = reach([raise, clear, { ...raise, at: 3000 }, clear, { ...raise, at: 5000 }]);
    expect(state).toMatchObject({ times: 3, activation: { raisedAt: 5000 } });
  });

  test("a shelf has a time, a most, and a reason", () => {
    const asked = (more: object) => advance(undefined, { ...shelve, ...more } as AlarmEvent, rules);
    const [, [tooLong]] = asked({ forMs: 481 * minute });
    expect(tooLong).toMatchObject({ kind: "rejected", why: "it may be shelved for at most 480 minutes at a time" });
    const [, [noReason]] = asked({ reason: "  " });
    expect(noReason).toMatchObject({ kind: "rejected", why: "shelving needs a reason" });
    const [, [noTime]] = asked({ forMs: 0 });
    expect(noTime).toMatchObject({ kind: "rejected", why: "shelving needs a time" });
    expect(asked({ forMs: 480 * minute })[0]?.shelved?.until).toBe(3000 + 480 * minute);
    // One that is for the present activation is capped by the most, too.
    expect(reach(ways["1+"])?.shelved?.until).toBe(3000 + 480 * minute);
  });

  test("a shelf ends to the millisecond, and by itself", () => {
    const shelved = reach(ways["G+"]);
    const until = 3000 + 30 * minute;
    expect(advance(shelved, { kind: "wall clock", at: until - 1 }, rules)).toEqual([shelved, []]);
    const [, records] = advance(shelved, { kind: "wall clock", at: until }, rules);
    expect(records).toMatchObject([
      { kind: "unshelved", why: "its time has run out" },
      { kind: "annunciated anew", says: "Q 3.4 × limit" },
    ]);
  });

  test("a clock that was set back hides nothing: the shelf ends", () => {
    const [after, records] = advance(reach(ways["G+"]), { kind: "wall clock", at: 3000 - 2 * minute }, rules);
    expect(letterOf(after)).toBe("B");
    expect(records[0]).toMatchObject({ why: "the clock was set back to before it began" });
    const [same] = advance(reach(ways["G+"]), { kind: "wall clock", at: 2500 }, rules); // a clock that is trimmed
    expect(letterOf(same)).toBe("G+");
  });

  test("an acknowledged alarm is annunciated anew after its time, where the rule asks for it", () => {
    const reminding = { ...rules, remindAfterMs: 10 * minute };
    const early = advance(reach(ways.C), { kind: "wall clock", at: 1499 + 10 * minute }, reminding);
    expect(kinds(early[1])).toBe("");
    const [after, records] = advance(reach(ways.C), { kind: "wall clock", at: 1500 + 10 * minute }, reminding);
    expect([letterOf(after), kinds(records)]).toEqual(["B", "annunciated anew"]);
  });

  test("what is for the record only asks nobody for anything", () => {
    const silent = { ...latching, annunciates: false };
    const [state, records] = advance(undefined, raise, silent);
    expect([state?.standing, kinds(records)]).toEqual(["acknowledged", "raised"]);
    expect(advance(state, clear, silent)).toEqual([undefined, [{ kind: "cleared", at: 2000 }]]);
    for (const command of [shelve, out])
      expect(advance(state, command, silent)[1]).toMatchObject([{ kind: "rejected" }]);
  });
});
