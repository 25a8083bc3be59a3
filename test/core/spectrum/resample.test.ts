import { describe, expect, test } from "vitest";
import { AxisError, axisFromSpec, resampler } from "../../../core/spectrum/index.ts";

const from = axisFromSpec({ unit: "nm", start: 1000, step: 5, count: 41 });
const cubic = (x: number) => 2 - 0.01 * x + 3e-5 * x ** 2 - 1e-8 * x ** 3;
const on = (points: Float64Array, f: (x: number) => number) => points.map(f);

describe("resampling", () => {
  test("gives back a cubic exactly, in either direction and on uneven axes", () => {
    for (const points of [
      [1000, 1001.7, 1100, 1199.9, 1200],
      [1200, 1100.3, 1003],
    ]) {
      const to = axisFromSpec({ unit: "nm", points });
      const out = new Float64Array(points.length);
      resampler(from, to)(on(from.points, cubic), out);
      out.forEach((value, i) => {
        expect(value).toBeCloseTo(cubic(points[i]), 10);
      });
    }
  });

  test("between nm and cm⁻¹ brings a band to its place", () => {
    const band = (nm: number) => Math.exp(-0.5 * ((nm - 1100) / 30) ** 2);
    const to = axisFromSpec({ unit: "cm-1", start: 9900, step: -20, count: 75 });
    const out = new Float64Array(75);
    resampler(from, to)(on(from.points, band), out);
    to.points.forEach((wavenumber, i) => {
      expect(out[i]).toBeCloseTo(band(1e7 / wavenumber), 4);
    });
  });

  test("copies the points that both axes have, to the bit, and does not catch a neighbour's NaN", () => {
    const to = axisFromSpec({ unit: "nm", points: [1150, 1100, 1050] });
    const values = from.points.map((x) => Math.sin(x));
    values[21] = Number.NaN; // 1105 nm, beside 1100
    const out = new Float64Array(3);
    resampler(from, to)(values, out);
    expect(Array.from(out)).toEqual([Math.sin(1150), Math.sin(1100), Math.sin(1050)]);
  });

  test("there and back over a reversed axis is the identity", () => {
    const reversed = axisFromSpec({ unit: "nm", start: 1200, step: -5, count: 41 });
    const values = from.points.map((x) => Math.sin(x));
    const [there, back] = [new Float64Array(41), new Float64Array(41)];
    resampler(from, reversed)(values, there);
    resampler(reversed, from)(there, back);
    expect(back).toEqual(values);
  });

  test("extrapolates nothing: the range that is not covered is named", () => {
    const wide = axisFromSpec({ unit: "nm", start: 990, step: 5, count: 45 });
    expect(() => resampler(from, wide)).toThrow(AxisError);
    expect(() => resampler(from, wide)).toThrow(/4 points between 990 and 1210 nm are not covered/);
    const low = axisFromSpec({ unit: "cm-1", points: [8300, 9000, 11000] });
    expect(() => resampler(from, low)).toThrow(/2 points between 8300 and 11000 cm⁻¹ are not covered/);
  });

  test("changes no input, and refuses a spectrum of another length", () => {
    const bring = resampler(from, from);
    const values = from.points.map((x) => x / 7);
    const before = Float64Array.from(values);
    bring(values, new Float64Array(41));
    expect(values).toEqual(before);
    expect(() => bring(new Float64Array(40), new Float64Array(41))).toThrow(/40 values into 41, expected 41 into 41/);
  });
});
