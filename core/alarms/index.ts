export {
  type Activation,
  type AlarmCommand,
  type AlarmEvent,
  type AlarmRecord,
  type AlarmState,
  isSetAside,
  type LifecycleRules,
  type Remark,
  type Standing,
  stateWord,
  waits,
} from "./alarm-state.ts";
export {
  conditionOf,
  isUpper,
  propertyCondition,
  ratioCondition,
  type Surroundings,
  unusableShareCondition,
} from "./condition.ts";
export {
  afterGap,
  type Condition,
  type Delays,
  type DetectorState,
  detect,
  detectInPlace,
  restingDetector,
  type Signal,
} from "./detector.ts";
export { type Drift, driftCondition, followDrift, type Outlook, outlookOf } from "./drift.ts";
export {
  type Account,
  apartFrom,
  type Beyond,
  excursionFrom,
  excursionId,
  excursionOf,
  extend,
  type OpenExcursion,
} from "./excursion.ts";
export { advance } from "./lifecycle.ts";
export {
  type Annunciation,
  alarmHistory,
  byAlarm,
  type Chattering,
  chatteringOf,
  type Flood,
  fleetingOf,
  floodsIn,
  mostWithin,
  performanceOf,
  recommendations,
  recommendedShares,
} from "./performance/index.ts";
