import { describe, expect, test } from "vitest";
import { adopt, labelExcursion, openExcursions } from "../../../core/judging/index.ts";
import { SmallStream, smallRules, unfamiliarAlarm } from "./small-stream.ts";

const strange = { foreign: 0.3 };
const minute = 60_000;

/** One letter a reading: u unfamiliar, i inside. */
function run(letters: string) {
  const stream = new SmallStream(smallRules([unfamiliarAlarm()]));
  const start = stream.time;
  const changed = [...letters].flatMap((letter) => stream.feed(letter === "u" ? strange : {}).excursions);
  const at = (reading: number) => start + reading * 10_000;
  const last = new Map(changed.filter(({ kind }) => kind === "unfamiliar").map((each) => [each.id, each]));
  return { stream, at, excursions: [...last.values()] };
}

describe("an excursion", () => {
  test("is no single reading beyond a limit", () => {
    expect(run("iuiiii").excursions).toEqual([]);
  });

  test("counts its readings, its peak and its mean, and ends with the last one beyond", () => {
    const { excursions, at } = run("iuuuuiii");
    expect(excursions).toMatchObject([{ start: at(2), end: at(5), ended: "returned", readings: 4, unit: "× limit" }]);
    const [{ peak, mean, peakTime }] = excursions;
    expect(peak).toBeGreaterThan(mean);
    expect(mean).toBeGreaterThan(1);
    expect(peakTime).toBeGreaterThanOrEqual(at(2));
  });

  test("that comes again after one or two readings is the same one", () => {
    const { excursions, at, stream } = run("iuuiuuiiuuiii");
    expect(excursions).toMatchObject([{ start: at(2), end: at(10), readings: 6 }]);
    expect(stream.kinds().filter((kind) => kind.startsWith("excursion"))).toEqual([
      "excursion began",
      "excursion ended",
    ]);
  });

  test("that comes again after three readings is another one", () => {
    const { excursions, at } = run("iuuiiiuuiii");
    expect(excursions.map(({ start, end }) => [start, end])).toEqual([
      [at(2), at(3)],
      [at(7), at(8)],
    ]);
  });

  test("two single readings beyond with one between are none", () => {
    expect(run("iuiuiii").excursions).toEqual([]);
  });

  test("names where on the axis it differs, over all its readings together", () => {
    const { excursions } = run(`i${"u".repeat(20)}iii`);
    const [{ regions, says }] = excursions;
    // The foreign band lies at 1 350 nm, 15 nm to either side.
    expect(regions![0].from).toBeGreaterThanOrEqual(1310);
    expect(regions![0].to).toBeLessThanOrEqual(1390);
    expect(regions![0]).toMatchObject({ unit: "nm", sign: 1 });
    expect(regions![0].share).toBeGreaterThan(0.5);
    expect(says).toMatch(/^1\u202f3\d\d–1\u202f3\d\d nm gives \d\d % of Q: more absorption/);
  });

  test("beyond T² names the regions of T², which may be others", () => {
    const stream = new SmallStream(smallRules([]));
    const seen = [{}, { a: 2.5 }, { a: 2.5 }, { a: 2.5 }].flatMap((amounts) => stream.feed(amounts).excursions);
    const last = seen.filter(({ kind }) => kind === "extrapolated").at(-1)!;
    // Ingredient a absorbs around 1 100 nm.
    expect(last.regions![0].from).toBeLessThan(1100);
    expect(last.regions![0].to).toBeGreaterThan(1100);
  });

  test("names the alarms that stood for it", () => {
    const { excursions, at } = run("iuuuuuiiii");
    expect(excursions[0].alarms).toEqual([{ key: "unfamiliar", raisedAt: at(4) }]);
    expect(run("iuuiiii").excursions[0].alarms).toBeUndefined(); // over before the alarm's on-delay
  });

  test("ended by a gap in the data says so; one that had returned just before says that", () => {
    const { stream } = run("iuuu");
    const { excursions } = stream.feed({}, 2 * minute);
    expect(excursions).toMatchObject([{ ended: "gap", readings: 3 }]);
    const { stream: back } = run("iuuui");
    expect(back.feed({}, 2 * minute).excursions).toMatchObject([{ ended: "returned", readings: 3 }]);
  });

  test("goes on after a restart as if nothing had been", () => {
    const whole = run(`i${"u".repeat(9)}iii`).excursions;
    const { stream } = run("iuuuu");
    const [state] = adopt(JSON.parse(JSON.stringify(stream.state)), stream.time, stream.rules);
    stream.state = state;
    const rest = [..."uuuuuiii"].flatMap((letter) => stream.feed(letter === "u" ? strange : {}).excursions);
    expect(rest.at(-1)).toEqual(whole[0]);
  });
});

describe("the label of an excursion", () => {
  const nowhere = () => undefined;
  const command = { kind: "label excursion" as const, excursion: "unfamiliar", at: 5, by: "R. Quill" };

  test("stays with an open one through the readings that follow", () => {
    const { stream, at } = run("iuuu");
    const labelled = labelExcursion(
      stream.state,
      { ...command, start: at(2), label: "cleaning", note: "hose on" },
      nowhere,
      stream.rules,
    );
    expect(labelled.notes).toMatchObject([{ kind: "excursion labelled", by: "R. Quill" }]);
    stream.state = labelled.state;
    const later = [strange, strange, {}, {}, {}].flatMap((amounts) => stream.feed(amounts).excursions);
    for (const excursion of later) {
      expect(excursion.label).toEqual({ is: "cleaning", by: "R. Quill", at: 5 });
      expect(excursion.notes).toEqual([{ says: "hose on", by: "R. Quill", at: 5 }]);
    }
    expect(later.at(-1)).toMatchObject({ ended: "returned", readings: 5 });
  });

  test("goes to one on record, and replacing it keeps the first in the record's words", () => {
    const { stream, excursions, at } = run("iuuuiii");
    const first = labelExcursion(
      stream.state,
      { ...command, start: at(2), label: "unknown" },
      () => excursions[0],
      stream.rules,
    );
    const second = labelExcursion(
      stream.state,
      { ...command, start: at(2), label: "false", by: "A. Thorne" },
      () => first.excursions[0],
      stream.rules,
    );
    expect(second.excursions).toEqual([{ ...excursions[0], label: { is: "false", by: "A. Thorne", at: 5 } }]);
    expect(second.notes[0].says).toContain('labelled "false" by A. Thorne, before: unknown by R. Quill');
  });

  test("for one that never was is rejected, and the rejection is on record", () => {
    const { stream, at } = run("iuuu");
    const { state, notes, rejected } = labelExcursion(
      stream.state,
      { ...command, start: at(1), label: "false" },
      nowhere,
      stream.rules,
    );
    expect(state).toBe(stream.state);
    expect(rejected).toContain("has no excursion");
    expect(notes).toMatchObject([{ kind: "command rejected", by: "R. Quill" }]);
  });

  test("a bubble's single reading is no excursion to label", () => {
    const { stream, at } = run("iu");
    expect(openExcursions(stream.state, stream.rules)).toEqual([]);
    const { rejected } = labelExcursion(
      stream.state,
      { ...command, start: at(2), label: "false" },
      nowhere,
      stream.rules,
    );
    expect(rejected).toContain("has no excursion");
  });
});
