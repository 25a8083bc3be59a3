import type { LimitSet } from "../limit-set/index.ts";
import type { RecordedStretch } from "./stretch.ts";

/** What a limit set's statistics make of a stretch: each statistic's limit, and which readings are inside. */
export interface Trust {
  t2: number;
  q: number;
  nearest: number;
  /** 1: no test fails; a reading may be believed */
  inside: Uint8Array;
}

export function trustOf(
  { t2, q, nearest }: Pick<RecordedStretch, "t2" | "q" | "nearest">,
  statistics: LimitSet["statistics"],
): Trust {
  const limits = { t2: statistics.t2.limit, q: statistics.q.limit, nearest: statistics.nearest.limit };
  const inside = new Uint8Array(t2.length);
  for (let i = 0; i < inside.length; i++) {
    // The common case without the words of the verdict; NaN is never inside.
    const within = t2[i] / limits.t2 <= 1 && q[i] / limits.q <= 1 && nearest[i] / limits.nearest <= 1;
    inside[i] = within ? 1 : 0;
  }
  return { ...limits, inside };
}
