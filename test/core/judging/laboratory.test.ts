import { expect, test } from "vitest";
import { adopt, hearLaboratory, openAlarms } from "../../../core/judging/index.ts";
import type { LabResult } from "../../../core/messages/index.ts";
import { labBiasAlarm, labResult, SmallStream, smallRules } from "./small-stream.ts";

const hour = 3_600_000;
const start = Date.UTC(2026, 5, 1);

/** A stream that hears the laboratory; predictions are 0.5. */
class Heard extends SmallStream {
  hear(result: LabResult): void {
    const [state, notes] = hearLaboratory(this.state, result, this.rules);
    this.state = state;
    this.notes.push(...notes);
  }
  hearAll(values: readonly number[], from = 0): LabResult[] {
    const results = values.map((value, i) => labResult(start + (from + i) * hour, value));
    for (const result of results) this.hear(result);
    return results;
  }
  open() {
    return openAlarms(this.state, this.rules);
  }
}
const stream = () => new Heard(smallRules([labBiasAlarm()]));

test("a bias that matters and is no chance raises the alarm with its third pair, and says so", () => {
  const heard = stream();
  heard.hearAll([0.501, 0.499, 0.5, 0.4, 0.398]);
  expect(heard.open()).toEqual([]);
  heard.hearAll([0.401], 5);
  const [alarm] = heard.open();
  expect(alarm.says).toMatch(
    /^a: the predictions lie 0\.10\u202f above the laboratory over the last 3 pairs \(p <\u00a00\.001\)\. Either may be off\.$/,
  );
  expect(alarm.since).toBe(start + 3 * hour); // the first pair at the new level, not the one that raised it
});

test("a bias below the one that was said to matter raises nothing, be it ever so significant", () => {
  const heard = stream();
  heard.hearAll([0.46, 0.461, 0.459, 0.46, 0.46]);
  expect(heard.kinds()).toEqual([]);
});

test("a mean that chance explains raises nothing", () => {
  const heard = stream();
  heard.hearAll([0.2, 0.55, 0.5]); // mean 0.083 beyond 0.05, p about 0.5
  expect(heard.kinds()).toEqual([]);
});

test("it clears when the bias has gone, and only below the deadband", () => {
  const heard = stream();
  heard.hearAll([0.4, 0.398, 0.401]);
  heard.hearAll([0.46, 0.46, 0.46], 3); // 0.04: under the limit, within the deadband
  expect(heard.kinds()).toEqual(["alarm raised"]);
  heard.hearAll([0.5], 6);
  expect(heard.kinds()).toEqual(["alarm raised", "alarm cleared"]);
});

test("a pair that is kept apart, or whose result is withdrawn, has no part in it", () => {
  const heard = stream();
  const apart = labResult(start, 0.3);
  heard.hear({ ...apart, pair: { ...apart.pair, apart: "not inside" } });
  const results = heard.hearAll([0.4, 0.398, 0.401, 0.399], 1);
  expect(heard.open()).toHaveLength(1);
  heard.hear({ ...results[3], version: 2, withdrawn: true });
  expect(heard.state.laboratory.a.map(({ laboratory }) => laboratory)).toEqual([0.4, 0.398, 0.401]);
});

test("a correction is judged at once", () => {
  const heard = stream();
  const results = heard.hearAll([0.401, 0.399, 0.4]);
  expect(heard.kinds()).toEqual(["alarm raised"]);
  for (const result of results) heard.hear({ ...result, version: 2, value: 0.5 });
  expect(heard.kinds()).toEqual(["alarm raised", "alarm cleared"]);
});

test("a pair from before the newest is put in its place, and judged with the next", () => {
  const heard = stream();
  heard.hearAll([0.4, 0.401], 1);
  heard.hear(labResult(start, 0.399));
  expect(heard.kinds()).toEqual([]);
  expect(heard.state.laboratory.a.map(({ time }) => time)).toEqual([0, 1, 2].map((i) => start + i * hour));
  heard.hearAll([0.4], 3);
  expect(heard.kinds()).toEqual(["alarm raised"]);
});

test("pairs of another model do not count: the bias of the old one is not that of the new", () => {
  const heard = stream();
  heard.hearAll([0.4, 0.401]);
  const other = labResult(start + 2 * hour, 0.4);
  heard.hear({ ...other, pair: { ...other.pair, model: "another" } });
  expect(heard.kinds()).toEqual([]);
});

test("it survives a restart, and a gap between readings", () => {
  const heard = stream();
  heard.feed();
  heard.hearAll([0.4, 0.401]);
  heard.feed({}, hour);
  [heard.state] = adopt(JSON.parse(JSON.stringify(heard.state)), heard.time, heard.rules);
  heard.hearAll([0.4], 2);
  expect(heard.kinds()).toContain("alarm raised");
  const again = adopt(JSON.parse(JSON.stringify(heard.state)), heard.time, heard.rules)[0];
  expect(openAlarms(again, heard.rules)).toEqual(heard.open());
});
