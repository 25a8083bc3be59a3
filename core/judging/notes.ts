import { afterGap } from "../alarms/index.ts";
import type { Excursion, RecordedEvent } from "../messages/index.ts";
import { endExcursions } from "./excursions.ts";
import type { StreamRules } from "./judge.ts";
import type { StreamState } from "./state.ts";

/** An entry for the record that has no place in its order yet: the single writer gives it its cursor. */
export type Note = Omit<RecordedEvent, "cursor">;

/** Readings come again after a gap: what was under way is ended as a gap, and runs begin anew. */
export function closeGap(state: StreamState, rules: StreamRules): [StreamState, Note[], Excursion[]] {
  const [next, notes, excursions] = endExcursions(state, "gap", rules);
  // A gap between readings is none between laboratory results.
  const byPairs = new Set(
    rules.limitSet.alarms.filter(({ watches }) => watches.kind === "lab bias").map(({ key }) => key),
  );
  const detectors = Object.fromEntries(
    Object.entries(next.detectors).map(([key, detector]) => [key, byPairs.has(key) ? detector : afterGap(detector)]),
  );
  return [{ ...next, detectors, drifts: {}, unusable: [], same: 0 }, notes, excursions];
}
