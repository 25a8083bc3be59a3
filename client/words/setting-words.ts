import type { Setting } from "../../core/rehearsal/index.ts";

const statisticWords = { t2: "T²", q: "Q", nearest: "nearest sample" };
export const numberWords: Record<Extract<Setting, { alarm: string }>["number"], string> = {
  "onDelay.readings": "comes after readings",
  "onDelay.of": "… of the last",
  "onDelay.seconds": "comes after seconds",
  "offDelay.readings": "goes after readings",
  "offDelay.seconds": "goes after seconds",
  limit: "limit",
  deadband: "deadband",
  share: "share",
  periods: "periods",
  timeConstantMinutes: "time constant, min",
  withinMinutes: "foretells, min",
  fromRatio: "from ratio",
};

/** One number of a limit set, as a person would name it. */
export function settingWords(setting: Setting): string {
  if ("statistic" in setting) return `limit of ${statisticWords[setting.statistic]}`;
  if ("confidenceOf" in setting) return `confidence of the limit of ${statisticWords[setting.confidenceOf]}`;
  return `${setting.alarm}: ${numberWords[setting.number]}`;
}
