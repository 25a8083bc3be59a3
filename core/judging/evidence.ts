import { isUpper, outlookOf } from "../alarms/index.ts";
import type { AlarmRule } from "../limit-set/index.ts";
import type { Judged } from "../messages/index.ts";
import type { StreamRules } from "./judge.ts";
import type { StreamState } from "./state.ts";
import { extrapolatedWords, nothingExplained, short, sparseWords, unfamiliarWords } from "./words.ts";

/** What speaks for an alarm at the moment it is raised, in words. `state` has seen the reading. */
export function evidence(rule: AlarmRule, judged: Judged, state: StreamState, rules: StreamRules): string {
  const { watches } = rule;
  switch (watches.kind) {
    case "property": {
      const unit = rules.scorer?.compiled.properties.find(({ name }) => name === watches.property)?.unit ?? "";
      const value = judged.properties[watches.property]?.value ?? Number.NaN;
      return `${watches.property} ${short(value)}\u202f${unit}, ${isUpper(watches) ? "above" : "below"} ${watches.limit}\u202f${unit}.`;
    }
    case "unfamiliar":
      return `Q ${short(judged.ratios.q ?? Number.NaN)} × limit. ${unfamiliarWords(rules.scorer?.explained() ?? nothingExplained)}`;
    case "extrapolated":
      return `T² ${short(judged.ratios.t2 ?? Number.NaN)} × limit. ${extrapolatedWords(rules.scorer?.explained() ?? nothingExplained)}`;
    case "sparse":
      return sparseWords;
    case "unusable share":
      return `${Math.round(watches.share * 100)} % or more of the last ${watches.among} readings are unusable; the last: ${judged.unusable ?? "usable"}.`;
    case "frozen":
      return `${judged.unusable ?? "the same spectrum again"}.`;
    case "silent":
      return "No readings.";
    case "lab bias":
      return "Biased against the laboratory."; // in full where it is judged: laboratory.ts
    case "drifting": {
      const drift = state.drifts[rule.key];
      if (!drift) return "Q rises.";
      const { ratio, untilLimitMs } = outlookOf(drift, watches.timeConstantMinutes * 60_000);
      return `Q ${short(ratio)} × limit and rising: it reaches its limit ${durationWords(untilLimitMs)} if it goes on so.`;
    }
    default:
      return watches satisfies never;
  }
}

/** "in about 14 min": rounded as a forecast should be. */
function durationWords(ms: number): string {
  const minutes = ms / 60_000;
  if (minutes < 1) return "within a minute";
  if (minutes < 90) return `in about ${Math.round(minutes)}\u202fmin`;
  const hours = minutes / 60;
  return hours < 48 ? `in about ${Math.round(hours)}\u202fh` : `in about ${Math.round(hours / 24)} days`;
}
