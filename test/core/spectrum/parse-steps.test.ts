import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { parseSteps, StepError, writeSteps } from "../../../core/spectrum/index.ts";
import { anySteps } from "./any-steps.ts";

describe("steps in words", () => {
  test("are read in order, with their numbers", () => {
    expect(
      parseSteps(
        "absorbance; snv; savitzky-golay 15 2 1;select 1100-1300 1500.5-1700 ; detrend; offset 1000-1010; normalise area; center;",
      ),
    ).toEqual([
      { step: "absorbance" },
      { step: "snv" },
      { step: "savitzky-golay", window: 15, order: 2, derivative: 1 },
      {
        step: "select",
        ranges: [
          [1100, 1300],
          [1500.5, 1700],
        ],
      },
      { step: "detrend", order: 1 },
      { step: "offset", range: [1000, 1010] },
      { step: "normalise", by: "area" },
      { step: "center" },
    ]);
  });

  test("are read back as they were written", () => {
    fc.assert(
      fc.property(anySteps, (steps) => {
        expect(parseSteps(writeSteps(steps))).toEqual(steps);
      }),
    );
  });

  test.each([
    "snv;;center",
    "SNV",
    "savitzky-golay 15 2",
    "savitzky-golay fifteen 2 1",
    "snv 3",
    "normalise",
    "normalise max",
    "select",
    "select 1100",
    "detrend 9",
    "constructor",
  ])("%j is refused, echoed, and every form that can be read is listed", (text) => {
    expect(() => parseSteps(text)).toThrow(StepError);
    expect(() => parseSteps(text)).toThrow(/savitzky-golay WINDOW ORDER DERIVATIVE/);
  });
});
