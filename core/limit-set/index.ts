export {
  changesInWords,
  decideLimits,
  type LimitAnswer,
  type LimitAsk,
  type LimitProposal,
  LimitProposalSchema,
  type LimitSituation,
  type Proposals,
} from "./changes.ts";
export { defaultAlarms } from "./default-alarms.ts";
export { type Difference, differences } from "./differences.ts";
export { type KeptLimits, KeptLimitsSchema } from "./kept-limits.ts";
export {
  type AlarmRule,
  AlarmRuleSchema,
  type AlarmRulesFile,
  AlarmRulesFileSchema,
  type Delay,
  type DriftingWatch,
  type LabBiasWatch,
  type LimitSet,
  LimitSetSchema,
  mostAmong,
  mostShelvedMinutes,
  type PropertyWatch,
  propertyOf,
  type Side,
  type StatisticLimit,
  sides,
  type UnusableShareWatch,
  type Watch,
} from "./limit-set.ts";
export { LimitSetError, parseAlarmRules, parseLimitSet } from "./parse.ts";
