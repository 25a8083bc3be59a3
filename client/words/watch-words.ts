import type { Delay, Watch } from "../../core/limit-set/index.ts";
import { duration } from "./duration.ts";
import { percent, thin } from "./quantity.ts";

/** What an alarm watches, as a person would say it: "water above 11 wt%, clear below 10.7 wt%". */
export function watchWords(watch: Watch, unitOf: (property: string) => string): string {
  switch (watch.kind) {
    case "property": {
      const upper = watch.side === "high" || watch.side === "high-high";
      const unit = thin + unitOf(watch.property);
      const clear = Number((watch.limit + (upper ? -watch.deadband : watch.deadband)).toPrecision(6));
      return `${watch.property} ${upper ? "above" : "below"} ${watch.limit}${unit}; clear ${upper ? "below" : "above"} ${clear}${unit}`;
    }
    case "extrapolated":
      return `T² beyond its limit; clear below ${percent(1 - watch.deadband)} of it`;
    case "unfamiliar":
      return `Q beyond its limit; clear below ${percent(1 - watch.deadband)} of it`;
    case "sparse":
      return "no calibration sample near";
    case "unusable share":
      return `${percent(watch.share)} or more of the last ${watch.among} readings unusable`;
    case "silent":
      return `no reading for ${watch.periods} periods`;
    case "frozen":
      return "the same spectrum again and again";
    case "lab bias": {
      const unit = thin + unitOf(watch.property);
      return `${watch.property} biased against the laboratory by more than ${watch.bias}${unit} over ${watch.pairs} pairs`;
    }
    case "drifting":
      return `Q on its way to its limit within ${duration(watch.withinMinutes * 60_000)}`;
    default:
      return watch satisfies never;
  }
}

/** "3 in a row", "3 of 5", "3 in a row for 30 s". */
export function delayWords({ readings, of, seconds }: Delay): string {
  const count =
    of !== undefined && of !== readings
      ? `${readings} of ${of}`
      : readings === 1
        ? "1 reading"
        : `${readings} in a row`;
  return seconds ? `${count} for ${duration(seconds * 1000)}` : count;
}
