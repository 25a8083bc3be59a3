import type { Agreement, LabResult } from "../messages/index.ts";
import type { ScoredPair } from "./compare.ts";

export interface Counted {
  /** in order of sample time */
  pairs: ScoredPair[];
  /** why the others do not count, and how many of each */
  apart: Agreement["apart"];
}

/** The results of one property that count for one model: not withdrawn, not kept apart, predicted by it. */
export function countedOf(results: readonly LabResult[], model: string): Counted {
  const apart = new Map<string, number>();
  const pairs = results.flatMap((result): ScoredPair[] => {
    const why = whyNotCounted(result, model);
    if (why === undefined) {
      const { time, value, pair } = result;
      return [{ time, predicted: pair.predicted!, laboratory: value, scores: pair.scores }];
    }
    apart.set(why, (apart.get(why) ?? 0) + 1);
    return [];
  });
  return {
    pairs: pairs.sort((a, b) => a.time - b.time),
    apart: [...apart].map(([why, count]) => ({ why, count })),
  };
}

export function whyNotCounted({ withdrawn, pair }: LabResult, model: string): string | undefined {
  if (withdrawn) return "withdrawn";
  if (pair.apart !== null) return pair.apart;
  if (pair.predicted === null) return "not inside";
  return pair.model === model ? undefined : "another model";
}
