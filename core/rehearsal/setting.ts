import { type Static, Type } from "typebox";
import type { AlarmRule, LimitSet } from "../limit-set/index.ts";

export const statisticNames = ["t2", "q", "nearest"] as const;
export type StatisticName = (typeof statisticNames)[number];

/** Numbers of an alarm that may be changed one at a time, as they are named in a limit set. */
export const alarmSettings = [
  "onDelay.readings",
  "onDelay.of",
  "onDelay.seconds",
  "offDelay.readings",
  "offDelay.seconds",
  "limit",
  "deadband",
  "share",
  "periods",
  "timeConstantMinutes",
  "withinMinutes",
  "fromRatio",
] as const;

/** One number of a limit set: what a sweep varies. */
export const SettingSchema = Type.Union([
  /** a statistic's limit, in its own unit */
  Type.Object({ statistic: Type.Enum(statisticNames) }, { additionalProperties: false }),
  /** the confidence that a statistic's limit is worked out for, by the method that the limit set names */
  Type.Object({ confidenceOf: Type.Enum(["t2", "q"] as const) }, { additionalProperties: false }),
  Type.Object({ alarm: Type.String(), number: Type.Enum(alarmSettings) }, { additionalProperties: false }),
]);
export type Setting = Static<typeof SettingSchema>;
type Numbers = Pick<LimitSet, "statistics" | "alarms">;

/** Works out a statistic's limit again for another confidence. @throws LimitError when its method has none */
export type LimitOf = (statistic: "t2" | "q", confidence: number) => number;

/** The limits with one number changed; those given stay as they are. An alarm that lacks the number stays as it is. */
export function withSetting<T extends Numbers>(limits: T, setting: Setting, value: number, limitOf: LimitOf): T {
  if ("statistic" in setting) return withStatistic(limits, setting.statistic, { method: "fixed", limit: value });
  if ("confidenceOf" in setting) {
    const name = setting.confidenceOf;
    return withStatistic(limits, name, { ...limits.statistics[name], confidence: value, limit: limitOf(name, value) });
  }
  const alarms = limits.alarms.map((rule) =>
    rule.key === setting.alarm ? withNumber(rule, setting.number, value) : rule,
  );
  return { ...limits, alarms };
}

function withStatistic<T extends Numbers>(limits: T, name: StatisticName, next: LimitSet["statistics"]["t2"]): T {
  return { ...limits, statistics: { ...limits.statistics, [name]: next } };
}

function withNumber(rule: AlarmRule, number: (typeof alarmSettings)[number], value: number): AlarmRule {
  const [part, field] = number.split(".");
  if (part === "onDelay" || part === "offDelay") {
    const delay = { ...rule[part], [field]: value };
    // k of n needs n ≥ k: more readings than were looked at mean so many in a row.
    if (delay.of !== undefined && delay.of <= delay.readings) delete delay.of;
    return { ...rule, [part]: delay };
  }
  return number in rule.watches ? { ...rule, watches: { ...rule.watches, [number]: value } } : rule;
}

/** The number as it stands; undefined where the limit set has none such. */
export function settingOf({ statistics, alarms }: Numbers, setting: Setting): number | undefined {
  if ("statistic" in setting) return statistics[setting.statistic].limit;
  if ("confidenceOf" in setting) return statistics[setting.confidenceOf].confidence;
  const rule = alarms.find(({ key }) => key === setting.alarm);
  if (!rule) return undefined;
  const [part, field] = setting.number.split(".");
  const from = part === "onDelay" || part === "offDelay" ? rule[part] : rule.watches;
  return (from as unknown as Record<string, number | undefined>)[field ?? part];
}
