import fc from "fast-check";
import { describe, expect, test } from "vitest";
import {
  applySteps,
  axisFromSpec,
  compileSteps,
  fitSteps,
  parseSteps,
  type Spectra,
  type Step,
  StepError,
} from "../../../core/spectrum/index.ts";
import { expectAgreement } from "../../reference/agreement.ts";
import { runs } from "../runs.ts";
import { anySteps } from "./any-steps.ts";

const axis = axisFromSpec({ unit: "nm", start: 1000, step: 10, count: 60 });
const spectraOf = (rows: readonly ArrayLike<number>[]): Spectra => ({
  axis,
  rows: rows.map((row) => Float64Array.from(row)),
  names: rows.map((_, i) => `s${i + 1}`),
});
/** Twelve smooth spectra with bands, slope and noise, none of them flat. */
const invented = spectraOf(
  Array.from({ length: 12 }, (_, i) =>
    Array.from(axis.points, (x, j) => {
      const band = (1 + 0.1 * i) * Math.exp(-0.5 * ((x - 1200 - 3 * i) / 50) ** 2);
      return 0.3 + band + 0.0002 * i * (x - 1000) + 0.001 * Math.sin(97 * i + 13 * j * j);
    }),
  ),
);
const spectrum = fc
  .array(fc.double({ min: 0.01, max: 3, noNaN: true }), { minLength: 60, maxLength: 60 })
  .filter((values) => Math.max(...values) - Math.min(...values) > 0.1);

function stepped(text: string, values: ArrayLike<number>): Float64Array {
  const { fitted } = fitSteps(parseSteps(text), invented);
  return applySteps(fitted, spectraOf([values])).rows[0];
}

/** A filter as wide as the range of an offset leaves nothing of the first channels, which then cannot be scaled. */
function fitOrSkip(steps: Step[]): ReturnType<typeof fitSteps> {
  try {
    return fitSteps(steps, invented);
  } catch (error) {
    fc.pre(!(error instanceof StepError && /in every sample, expected a channel that varies/.test(error.message)));
    throw error;
  }
}

describe("steps folded together", () => {
  test("give what the steps give one by one, to 1e-10", () => {
    fc.assert(
      fc.property(anySteps, spectrum, (steps, values) => {
        const { fitted, after } = fitOrSkip(steps);
        const one = applySteps(fitted, spectraOf([values])).rows[0];
        const folded = new Float64Array(after.axis.points.length);
        const before = Float64Array.from(values);
        compileSteps(fitted, axis)(before, folded);
        expectAgreement(folded, one, 1e-10, steps.map(({ step }) => step).join("; "));
        expect(Array.from(before)).toEqual(values);
      }),
      { numRuns: runs(400) },
    );
  });

  test.each([
    "absorbance; snv; center",
    "msc; savitzky-golay 7 2 1; center; scale",
    "offset; normalise area; center",
    "center; savitzky-golay 5 2 1",
    "select 1100-1300; savitzky-golay 5 2 0; snv; center",
  ])("%s: the calibration spectra come out the same both ways", (text) => {
    const { fitted, after } = fitSteps(parseSteps(text), invented);
    const folded = compileSteps(fitted, axis);
    invented.rows.forEach((row, i) => {
      const out = new Float64Array(after.axis.points.length);
      folded(row, out);
      expectAgreement(out, after.rows[i], 1e-10, text);
    });
  });
});

describe("what a step makes itself independent of", () => {
  const shifted = (values: number[], add: number, times: number) => values.map((value) => add + times * value);
  const size = fc.double({ min: 0.2, max: 5, noNaN: true });
  const level = fc.double({ min: -2, max: 2, noNaN: true });

  test("SNV and MSC: adding a constant and rescaling", () => {
    fc.assert(
      fc.property(spectrum, level, size, (values, add, times) => {
        for (const step of ["snv", "msc"])
          expectAgreement(stepped(step, shifted(values, add, times)), stepped(step, values), 1e-9, step);
      }),
      { numRuns: runs(60) },
    );
  });

  test("a derivative and offset: adding a constant; normalise: rescaling; detrend: adding a line", () => {
    fc.assert(
      fc.property(spectrum, level, size, (values, add, times) => {
        const lifted = shifted(values, add, 1);
        for (const step of ["savitzky-golay 7 2 1", "offset", "offset 1000-1100"]) {
          expectAgreement(stepped(step, lifted), stepped(step, values), 1e-9, step, 1);
        }
        for (const step of ["normalise area", "normalise length"]) {
          expectAgreement(stepped(step, shifted(values, 0, times)), stepped(step, values), 1e-12, step);
        }
        const tilted = values.map((value, j) => value + add + times * j);
        expectAgreement(stepped("detrend 1", tilted), stepped("detrend 1", values), 1e-9, "detrend", 1);
      }),
      { numRuns: runs(60) },
    );
  });

  test("the derivative of a falling axis is per unit of the axis, so it has the sign of the rising one's", () => {
    const falling = axisFromSpec({ unit: "nm", start: 1590, step: -10, count: 60 });
    const line = (points: Float64Array) => points.map((x) => 2 * x);
    const at = (a: typeof axis) =>
      applySteps([{ step: "savitzky-golay", window: 5, order: 2, derivative: 1 }], {
        axis: a,
        rows: [line(a.points)],
        names: ["x"],
      });
    expectAgreement(at(falling).rows[0], at(axis).rows[0], 1e-9, "slope");
    expect(at(axis).rows[0][30]).toBeCloseTo(2, 9);
  });
});

describe("spectra that a step cannot be fitted on are refused by name", () => {
  const flat = spectraOf([...invented.rows.slice(0, 3), new Float64Array(60).fill(0.7)]);
  const dark = spectraOf([...invented.rows.slice(0, 3), Float64Array.from(invented.rows[0]).fill(0, 7, 8)]);
  const still = spectraOf(invented.rows.map((row) => Float64Array.from(row).fill(0.25, 4, 5)));
  test.each([
    ["snv", flat, /snv: sample s4 is 0\.7 in every channel/],
    ["msc", flat, /msc: sample s4/],
    [
      "normalise area",
      spectraOf([invented.rows[0], new Float64Array(60)]),
      /normalise area: sample s2 is zero in every channel/,
    ],
    ["absorbance", dark, /absorbance: sample s4 at 1070 nm is 0, expected transmittance above 0/],
    ["center; scale", still, /scale: the channel at 1040 nm is 0.* in every sample/],
  ])("%s", (text, spectra, says) => {
    expect(() => fitSteps(parseSteps(text), spectra)).toThrow(StepError);
    expect(() => fitSteps(parseSteps(text), spectra)).toThrow(says);
  });

  test.each([
    ["savitzky-golay 6 2 1", /the window is 6, expected an odd number/],
    ["savitzky-golay 5 5 1", /the window is 5, expected more than the order, 5/],
    ["savitzky-golay 5 1 2", /the derivative is 2, expected at most the order, 1/],
    ["savitzky-golay 61 2 1", /the window is 61, expected at most the number of channels, 60/],
    ["select 1000-1100 1300-1400; savitzky-golay 5 2 1", /not evenly spaced here/],
    ["select 100-200", /the range 100-200 nm is empty/],
    ["select 1000-1005", /1 channel, expected at least 2/],
  ])("%s", (text, says) => {
    expect(() => fitSteps(parseSteps(text), invented)).toThrow(says);
  });
});

describe("a senseless order is refused with the reason", () => {
  test.each([
    [
      "snv; absorbance",
      /absorbance after snv, expected absorbance before all but select: the logarithm needs the light itself/,
    ],
    ["center; snv", /snv after center.*gone once the channels have been made comparable one by one/],
    ["center; scale; savitzky-golay 5 2 1", /savitzky-golay after scale/],
    ["savitzky-golay 5 2 1; msc", /msc after savitzky-golay/],
    ["snv; snv", /snv once: the second changes nothing/],
  ])("%s", (text, says) => {
    expect(() => fitSteps(parseSteps(text), invented)).toThrow(says);
  });
});
