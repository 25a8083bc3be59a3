import { type Axis, describeAxis } from "../axis.ts";
import { type Apply, type Fitted, StepError } from "../step.ts";

/** Keeps the channels that stand in any of the ranges, ends included, in the order of the axis. */
export function select(step: Fitted<"select">, axis: Axis): Apply {
  const channels = channelsOf(step.ranges, axis, "select");
  return (values, out) => {
    for (let k = 0; k < channels.length; k++) out[k] = values[channels[k]];
  };
}

export function axisAfterSelect(step: Fitted<"select">, axis: Axis): Axis {
  const channels = channelsOf(step.ranges, axis, "select");
  if (channels.length < 2) {
    throw new StepError("select", {
      got: `${channels.length} channel`,
      expected: "at least 2",
      todo: "Widen the ranges.",
    });
  }
  return { unit: axis.unit, points: Float64Array.from(channels, (j) => axis.points[j]) };
}

/**
 * Indices of the channels in the ranges, ends included.
 *
 * @throws StepError naming a range that holds no channel.
 */
export function channelsOf(ranges: readonly (readonly [number, number])[], axis: Axis, step: string): Int32Array {
  const inside = (point: number, [a, b]: readonly [number, number]) =>
    point >= Math.min(a, b) && point <= Math.max(a, b);
  for (const range of ranges) {
    if (axis.points.some((point) => inside(point, range))) continue;
    throw new StepError(`${step}: the range ${range[0]}-${range[1]} ${axis.unit}`, {
      got: "empty",
      expected: `a range with channels in it (${describeAxis(axis)})`,
      todo: "Correct the range, or its unit.",
    });
  }
  const kept: number[] = [];
  axis.points.forEach((point, j) => {
    if (ranges.some((range) => inside(point, range))) kept.push(j);
  });
  return Int32Array.from(kept);
}
