import { expect, test } from "vitest";
import { whyNotTaken } from "../../../core/agreement/index.ts";

const properties = [
  { name: "water", unit: "wt%", range: [3, 12] as const },
  { name: "ethanol", unit: "wt%", range: [86, 97] as const },
];
const good = { property: "water", value: 7.2, unit: "wt%" };

test("a result in its property's unit and within reach of its calibration is taken", () => {
  expect(whyNotTaken(good, properties)).toBeUndefined();
  expect(whyNotTaken({ ...good, value: 14 }, properties)).toBeUndefined(); // beyond the calibration, but plausible
});

test.each([
  [{ ...good, property: "watre" }, 'property is "watre", expected one of "water", "ethanol"'],
  [{ ...good, unit: "" }, 'unit of water is missing, expected "wt%"'],
  [{ ...good, unit: "ppm" }, 'unit of water is "ppm", expected "wt%". Nothing is converted'],
  [{ ...good, value: 72 }, "water is 72 wt%, expected -6 to 21 wt% (calibrated: 3 to 12 wt%). Check the decimal point"],
])("%j is not taken: %s", (result, says) => {
  expect(whyNotTaken(result, properties)).toContain(says);
});

test("what the plant says is plausible rules", () => {
  expect(whyNotTaken({ ...good, value: 14 }, properties, { water: [0, 13] })).toContain("expected 0 to 13 wt%");
  expect(whyNotTaken({ ...good, value: 72 }, properties, { water: [0, 100] })).toBeUndefined();
});
