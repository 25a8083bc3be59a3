import type { Diagnostics, SampleInfluence } from "../../core/pls/index.ts";
import type { Look } from "./plot.ts";

/** A sample to look at stands in the colour of "extrapolated" when it is only extreme, else in that of "unfamiliar"; the others in ink. */
export function lookOfSample({ suspicions }: SampleInfluence): Look {
  if (suspicions.length === 0) return "ink";
  return suspicions.every(({ kind }) => kind === "extreme") ? "extrapolated" : "unfamiliar";
}

/** The samples to look at, with the colour that each stands in. */
export function looksOf({ samples: all }: Diagnostics): Map<string, Look> {
  return new Map(
    all.filter(({ suspicions }) => suspicions.length > 0).map((sample) => [sample.name, lookOfSample(sample)]),
  );
}
