import { describe, expect, test } from "vitest";
import { AxisError, axisFromSpec, evenSpacing, sameAxis, specOfAxis } from "../../../core/spectrum/index.ts";

const nm = (points: number[]) => axisFromSpec({ unit: "nm", points });

describe("an axis", () => {
  test("of start, step and count has the points that they say, falling for a negative step", () => {
    expect(Array.from(axisFromSpec({ unit: "nm", start: 1000, step: 4, count: 3 }).points)).toEqual([1000, 1004, 1008]);
    expect(Array.from(axisFromSpec({ unit: "cm-1", start: 9000, step: -8, count: 3 }).points)).toEqual([
      9000, 8992, 8984,
    ]);
  });

  test.each([
    ["one point", [1000], /axis is 1 points, expected at least 2/],
    ["a turn", [1000, 1010, 1005], /axis point 3 is 1005 nm after 1010, expected points that rise, or fall/],
    ["a repeat", [1000, 1000], /axis point 2 is 1000 nm after 1000/],
    ["zero", [0, 10], /axis point 1 is 0 nm, expected a finite number above 0/],
    ["NaN", [1000, Number.NaN], /axis point 2 is NaN nm/],
    ["an endless point", [1000, Number.POSITIVE_INFINITY], /axis point 2 is Infinity nm/],
  ])("with %s is refused, and the point named", (_, points, says) => {
    expect(() => nm(points)).toThrow(AxisError);
    expect(() => nm(points)).toThrow(says);
  });

  test("comes back from the spec that is made of it", () => {
    expect(specOfAxis(nm([1000, 1002, 1004]))).toEqual({ unit: "nm", start: 1000, step: 2, count: 3 });
    expect(specOfAxis(nm([1000, 1002, 1005]))).toEqual({ unit: "nm", points: [1000, 1002, 1005] });
    const thirds = { unit: "nm", start: 900, step: 1 / 3, count: 100 } as const;
    expect(axisFromSpec(specOfAxis(axisFromSpec(thirds)))).toEqual(axisFromSpec(thirds));
  });

  test("is the same when unit, direction and points agree to a millionth of the spacing", () => {
    expect(sameAxis(nm([1000, 1002]), nm([1000, 1002.000001]))).toBe(true);
    expect(sameAxis(nm([1000, 1002]), nm([1000, 1002.01]))).toBe(false);
    expect(sameAxis(nm([1000, 1002]), nm([1002, 1000]))).toBe(false);
    expect(sameAxis(nm([1000, 1002]), nm([1000, 1002, 1004]))).toBe(false);
    expect(sameAxis(nm([1000, 1002]), axisFromSpec({ unit: "cm-1", points: [1000, 1002] }))).toBe(false);
  });

  test("tells its spacing only when it is even", () => {
    expect(evenSpacing(nm([1000, 998, 996]))).toBe(-2);
    expect(evenSpacing(nm([1000, 1002, 1005]))).toBeUndefined();
    expect(evenSpacing(nm([1000, 1003.333, 1006.667, 1010]))).toBeUndefined();
    expect(evenSpacing(nm([1000, 1003.33333, 1006.66667, 1010]))).toBeCloseTo(10 / 3, 9);
  });
});
