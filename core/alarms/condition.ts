import type { AlarmRule, PropertyWatch, UnusableShareWatch } from "../limit-set/index.ts";
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
      return propertyCondition(
        judged.properties[watches.property]?.value ?? Number.NaN,
        judged.verdict.includes("inside"),
        watches,
        rule.untrusted,
      );
    case "extrapolated":
      return ratioCondition(judged.ratios.t2 ?? Number.NaN, watches.deadband);
    case "unfamiliar":
      return ratioCondition(judged.ratios.q ?? Number.NaN, watches.deadband);
    case "sparse":
      return ratioCondition(judged.ratios.nearest ?? Number.NaN, watches.deadband);
    case "unusable share":
      return unusableShareCondition(surroundings.unusable, watches);
    case "silent":
      return "clear"; // a reading is here; that there is none, the clock says
    case "frozen":
      return surroundings.frozen ? "beyond" : "clear";
    case "drifting":
      return driftCondition(surroundings.drift, judged.ratios.q, watches);
    case "lab bias":
      return "none"; // a reading says nothing of it: the laboratory does
    default:
      return watches satisfies never;
  }
}

/** An unusable reading has no statistics (NaN), so it says nothing about them. */
export function ratioCondition(ratio: number, deadband: number): Condition {
  if (Number.isNaN(ratio)) return "none";
  if (ratio > 1) return "beyond";
  return ratio <= 1 - deadband ? "clear" : "between";
}

/** @param value of the property, NaN where there is none */
export function propertyCondition(
  value: number,
  inside: boolean,
  watch: PropertyWatch,
  untrusted: AlarmRule["untrusted"],
): Condition {
  if (Number.isNaN(value)) return "none";
  if (!inside && untrusted !== "evaluate") return untrusted === "hold" ? "none" : "clear";
  const over = isUpper(watch) ? value - watch.limit : watch.limit - value;
  if (over > 0) return "beyond";
  return over <= -watch.deadband ? "clear" : "between";
}

/** @param unusable of the last readings, this one included, which were: 1 or 0, oldest first */
export function unusableShareCondition(unusable: readonly number[], watch: UnusableShareWatch): Condition {
  const { length } = unusable;
  if (length < watch.among) return "clear"; // too few to speak of a share
  let count = 0;
  for (let i = length - watch.among; i < length; i++) count += unusable[i];
  return count / watch.among >= watch.share ? "beyond" : "clear";
}

export function isUpper(watch: PropertyWatch): boolean {
  return watch.side === "high" || watch.side === "high-high";
}
