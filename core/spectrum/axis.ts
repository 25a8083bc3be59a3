import { MillraceError, type Mismatch, mismatchSentence } from "../errors.ts";
import type { AxisSpec } from "../messages/index.ts";

/** Where the values of a spectrum stand: strictly ascending or strictly descending, all above zero. */
export interface Axis {
  unit: "nm" | "cm-1";
  points: Float64Array;
}

/** An axis that is none, or two axes that do not fit each other. */
export class AxisError extends MillraceError {
  readonly code = "axis";
  constructor(where: string, mismatch: Mismatch) {
    super(mismatchSentence(where, mismatch), { cause: mismatch.cause });
  }
}

/**
 * The axis that a spec describes; a step may be negative.
 *
 * @throws AxisError when there are fewer than two points, or they are not finite, positive and strictly monotone.
 */
export function axisFromSpec(spec: AxisSpec): Axis {
  const points =
    "points" in spec
      ? Float64Array.from(spec.points)
      : Float64Array.from({ length: spec.count }, (_, i) => spec.start + i * spec.step);
  checkPoints(points, spec.unit);
  return { unit: spec.unit, points };
}

/** The shortest spec that gives back exactly these points: start, step and count where that is exact, else every point. */
export function specOfAxis({ unit, points }: Axis): AxisSpec {
  const start = points[0];
  const step = points[1] - start;
  const exact = points.every((point, i) => point === start + i * step);
  return exact ? { unit, start, step, count: points.length } : { unit, points: Array.from(points) };
}

/** True when both have the same unit and direction, and each pair of points agrees within a millionth of the spacing there. */
export function sameAxis(a: Axis, b: Axis): boolean {
  if (a === b) return true;
  if (a.unit !== b.unit || a.points.length !== b.points.length) return false;
  for (let i = 0; i < a.points.length; i++) {
    const beside = i === 0 ? 1 : i - 1;
    const tolerance = 1e-6 * Math.abs(a.points[i] - a.points[beside]);
    if (Math.abs(a.points[i] - b.points[i]) > tolerance) return false;
  }
  return true;
}

/**
 * The signed distance between neighbouring points, or undefined when the axis is not evenly spaced (to a hundred-thousandth
 * of the mean spacing, which leaves room for points that were written with few digits).
 */
export function evenSpacing({ points }: Axis): number | undefined {
  const spacing = (points[points.length - 1] - points[0]) / (points.length - 1);
  for (let i = 0; i < points.length; i++) {
    if (Math.abs(points[i] - (points[0] + i * spacing)) > 1e-5 * Math.abs(spacing)) return undefined;
  }
  return spacing;
}

/** "1000–2200 nm, 301 points", in the order in which the points stand. */
export function describeAxis({ unit, points }: Axis): string {
  return `${points[0]}–${points[points.length - 1]} ${unit === "cm-1" ? "cm⁻¹" : "nm"}, ${points.length} points`;
}

function checkPoints(points: Float64Array, unit: string): void {
  if (points.length < 2) {
    throw new AxisError("axis", {
      got: `${points.length} points`,
      expected: "at least 2",
      todo: "Give one point for each value of the spectrum.",
    });
  }
  const direction = Math.sign(points[1] - points[0]);
  for (let i = 0; i < points.length; i++) {
    if (!(points[i] > 0) || !Number.isFinite(points[i])) {
      throw new AxisError(`axis point ${i + 1}`, {
        got: `${points[i]} ${unit}`,
        expected: "a finite number above 0",
        todo: "Correct the axis.",
      });
    }
    if (i > 0 && !(Math.sign(points[i] - points[i - 1]) === direction && direction !== 0)) {
      throw new AxisError(`axis point ${i + 1}`, {
        got: `${points[i]} ${unit} after ${points[i - 1]}`,
        expected: "points that rise, or fall, from first to last",
        todo: "Sort the axis and its values together.",
      });
    }
  }
}
