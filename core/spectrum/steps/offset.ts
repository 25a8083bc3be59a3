import type { Axis } from "../axis.ts";
import type { Apply, Fitted } from "../step.ts";
import { channelsOf } from "./select.ts";

/** Brings each spectrum down to zero: by its smallest value, or by its mean over a range of the axis where nothing absorbs. */
export function offset(step: Fitted<"offset">, axis: Axis): Apply {
  const quiet = step.range && channelsOf([step.range], axis, "offset");
  return (values, out) => {
    let level = quiet ? 0 : Number.POSITIVE_INFINITY;
    if (quiet) for (let k = 0; k < quiet.length; k++) level += values[quiet[k]] / quiet.length;
    else for (let j = 0; j < values.length; j++) level = Math.min(values[j], level);
    for (let j = 0; j < values.length; j++) out[j] = values[j] - level;
  };
}
