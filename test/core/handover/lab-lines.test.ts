import { expect, test } from "vitest";
import { labLines } from "../../../core/handover/index.ts";
import type { LabResult } from "../../../core/messages/index.ts";
import { plantTime } from "../../../core/words/index.ts";
import { begin, hour, shift } from "./some-record.ts";

const model = "m".repeat(64);
const compared = {
  property: "ethanol",
  unit: "wt%",
  range: [80, 98] as [number, number],
  promised: { rmsecv: 0.2, freedom: 40 },
};

function result(at: number, value: number, predicted: number | null, more: Partial<LabResult> = {}): LabResult {
  const apart = predicted === null ? ("not inside" as const) : null;
  const pair = {
    from: at,
    to: at,
    readings: 5,
    interpolated: false,
    verdict: "inside" as const,
    says: "It was not inside.",
  };
  return {
    ...{ stream: "s-1", property: "ethanol", time: at, method: "", sample: "", value, unit: "wt%", by: "Lab" },
    ...{ receivedAt: at + hour, origin: "message", version: 1, withdrawn: false, changes: [] },
    pair: { ...pair, predicted, apart, model, limitSet: 1, scores: null },
    ...more,
  };
}
const linesOf = (results: readonly LabResult[]) =>
  labLines({ results, from: shift.from, to: shift.to, model, compared }, plantTime("Europe/Oslo"));

test("a result is told in the shift in which it came in, beside its prediction", () => {
  const [line, ...others] = linesOf([
    result(begin - 30 * hour, 90, 90.1),
    result(begin - hour / 2, 90, 90.11),
    result(begin + 20 * hour, 90, 90),
  ]);
  expect(others).toEqual([]);
  expect(line).toMatchObject({ at: begin - hour / 2, laboratory: 90, predicted: 90.11, disagrees: false });
  expect(line.says).toBe("Ethanol: laboratory 90.00\u2009wt%, predicted 90.11\u2009wt%, +0.11\u2009wt% apart.");
});

test("beyond three standard errors of the model the two disagree; with nothing to be believed there is nothing to compare", () => {
  expect(linesOf([result(begin, 90, 90.7)])[0].disagrees).toBe(true);
  const [apart] = linesOf([result(begin, 90, null)]);
  expect([apart.disagrees, apart.says]).toEqual([
    false,
    "Ethanol: laboratory 90.00\u2009wt%, no prediction that may be believed. It was not inside.",
  ]);
});

test("a withdrawn result is not told", () => {
  expect(linesOf([result(begin, 90, 90.7, { withdrawn: true })])).toEqual([]);
});

test("pair after pair on one side is a disagreement, though none alone is", () => {
  const days = Array.from({ length: 20 }, (_, i) =>
    result(begin - (19 - i) * 24 * hour, 90, 90.3 + (i % 3) / 50, i < 19 ? {} : { receivedAt: begin + hour }),
  );
  const [line] = linesOf(days);
  expect(line.disagrees).toBe(true);
  expect(line.says).toMatch(/Ethanol is biased by \+0\.3\d\u2009wt% since/);
});
