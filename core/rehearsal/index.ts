export {
  mostSweepValues,
  type RehearsalRequest,
  RehearsalRequestSchema,
  type RehearsalResult,
  type RehearsalStanding,
  SweepingSchema,
} from "./messages.ts";
export {
  type AlarmOutcome,
  type EventOutcome,
  type LabelledEvent,
  labelledEvents,
  type Outcome,
  outcomeOf,
} from "./outcome.ts";
export { periodsOf, Rehearsal, type Rehearsed, type RehearsedAlarm } from "./rehearse.ts";
export { type Activation, type Periods, replayAlarm } from "./replay-alarm.ts";
export { RescoreError, rescored } from "./rescore.ts";
export {
  alarmSettings,
  type LimitOf,
  type Setting,
  SettingSchema,
  type StatisticName,
  settingOf,
  statisticNames,
  withSetting,
} from "./setting.ts";
export { pictureOf, type StatisticPicture, type Theory, theoryOf } from "./statistics.ts";
export {
  cutOut,
  dataGap,
  frozen,
  noGap,
  type RecordedStretch,
  type Span,
  spansOfStates,
  unusable,
  usable,
  withoutCuts,
} from "./stretch.ts";
export { bestOf, type SweepCell, type Sweeping, sweep } from "./sweep.ts";
export { type Trust, trustOf } from "./trust.ts";
