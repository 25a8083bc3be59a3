import {
  type Condition,
  type Drift,
  driftCondition,
  followDrift,
  propertyCondition,
  ratioCondition,
  unusableShareCondition,
} from "../alarms/index.ts";
import type { AlarmRule, DriftingWatch, UnusableShareWatch } from "../limit-set/index.ts";
import { frozen, type RecordedStretch, unusable } from "./stretch.ts";
import type { Trust } from "./trust.ts";

/** The condition of one alarm, reading by reading. */
export interface ConditionOver {
  /** to be asked for each reading in its order */
  at(i: number): Condition;
  /** a gap: what was remembered is forgotten */
  reset(): void;
}

const nothing = () => {};

/** The same conditions as `conditionOf` (core/alarms), over columns. */
export function conditionOver(rule: AlarmRule, stretch: RecordedStretch, trust: Trust): ConditionOver {
  const { watches } = rule;
  switch (watches.kind) {
    case "property": {
      const values = stretch.properties.get(watches.property);
      if (!values) return { at: () => "none", reset: nothing };
      const { inside } = trust;
      return { at: (i) => propertyCondition(values[i], inside[i] === 1, watches, rule.untrusted), reset: nothing };
    }
    case "extrapolated":
      return ratioOver(stretch.t2, trust.t2, watches.deadband);
    case "unfamiliar":
      return ratioOver(stretch.q, trust.q, watches.deadband);
    case "sparse":
      return ratioOver(stretch.nearest, trust.nearest, watches.deadband);
    case "unusable share":
      return unusableShareOver(stretch, watches);
    case "silent":
      return { at: () => "clear", reset: nothing };
    case "frozen":
      return { at: (i) => (stretch.usability[i] === frozen ? "beyond" : "clear"), reset: nothing };
    case "lab bias":
      return { at: () => "none", reset: nothing }; // a reading says nothing of it
    case "drifting":
      return driftOver(stretch, trust, watches);
    default:
      return watches satisfies never;
  }
}

function ratioOver(statistic: Float64Array, limit: number, deadband: number): ConditionOver {
  return { at: (i) => ratioCondition(statistic[i] / limit, deadband), reset: nothing };
}

function unusableShareOver({ usability }: RecordedStretch, watch: UnusableShareWatch): ConditionOver {
  let seen: number[] = [];
  return {
    at(i) {
      seen.push(usability[i] === unusable ? 1 : 0);
      if (seen.length > watch.among) seen.shift();
      return unusableShareCondition(seen, watch);
    },
    reset() {
      seen = [];
    },
  };
}

function driftOver({ q, time }: RecordedStretch, trust: Trust, watch: DriftingWatch): ConditionOver {
  const timeConstantMs = watch.timeConstantMinutes * 60_000;
  let drift: Drift | undefined;
  return {
    at(i) {
      const ratio = q[i] / trust.q;
      if (Number.isNaN(ratio)) return "none";
      drift = followDrift(drift, ratio, time[i], timeConstantMs);
      return driftCondition(drift, ratio, watch);
    },
    reset() {
      drift = undefined;
    },
  };
}
