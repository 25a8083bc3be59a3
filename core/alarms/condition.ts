import type { AlarmRule, PropertyWatch } from "../limit-set/index.ts";
import type { Judged } from "../messages/index.ts";
import type { Condition } from "./detector.ts";
import { type Drift, driftCondition } from "./drift.ts";

/** What the conditions look at besides the reading itself. */
export interface Surroundings {
  /** of the last readings, which were unusable: 1 or 0, oldest first */
  unusable: readonly number[];
  /** the reading repeats the spectrum before it, and did so often enough to be called frozen */
  frozen: boolean;
  /** for an alarm on drift: its memory, this reading included */
  drift?: Drift;
}

/** What one reading says about the condition of one alarm. */
export function conditionOf(rule: AlarmRule, judged: Judged, surroundings: Surroundings): Condition {
  const { watches } = rule;
  switch (watches.kind) {
    case "property":
      return propertyCondition(rule, watches, judged);
    case "extrapolated":
      return ratioCondition(judged.ratios.t2, watches.deadband);
    case "unfamiliar":
      return ratioCondition(judged.ratios.q, watches.deadband);
    case "sparse":
      return ratioCondition(judged.ratios.nearest, watches.deadband);
    case "unusable share": {
      const seen = surroundings.unusable.slice(-watches.among);
      if (seen.length < watches.among) return "clear"; // too few to speak of a share
      return seen.reduce((n, flag) => n + flag, 0) / seen.length >= watches.share ? "beyond" : "clear";
    }
    case "silent":
      return "clear"; // a reading is here; that there is none, the clock says
    case "frozen":
      return surroundings.frozen ? "beyond" : "clear";
    case "drifting":
      return driftCondition(surroundings.drift, judged.ratios.q, watches);
    default:
      return watches satisfies never;
  }
}

/** An unusable reading has no statistics, so it says nothing about them. */
function ratioCondition(ratio: number | null, deadband: number): Condition {
  if (ratio === null) return "none";
  if (ratio > 1) return "beyond";
  return ratio <= 1 - deadband ? "clear" : "between";
}

function propertyCondition(rule: AlarmRule, watch: PropertyWatch, judged: Judged): Condition {
  const value = judged.properties[watch.property]?.value ?? null;
  if (value === null) return "none";
  if (!judged.verdict.includes("inside") && rule.untrusted !== "evaluate") {
    return rule.untrusted === "hold" ? "none" : "clear";
  }
  const over = isUpper(watch) ? value - watch.limit : watch.limit - value;
  if (over > 0) return "beyond";
  return over <= -watch.deadband ? "clear" : "between";
}

export function isUpper(watch: PropertyWatch): boolean {
  return watch.side === "high" || watch.side === "high-high";
}
