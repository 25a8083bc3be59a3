export { adopt } from "./adopt.ts";
export { lifecycleRules } from "./advance-alarm.ts";
export { commandAlarm } from "./alarm-command.ts";
export { openAlarms, setAsideAlarms } from "./alarms.ts";
export { endExcursions, openExcursions } from "./excursions.ts";
export {
  type Arrival,
  defaultLaboratory,
  type Judgement,
  judge,
  type LaboratoryRules,
  type RefusalReason,
  type StreamRules,
  tick,
  verdictOf,
} from "./judge.ts";
export { type ExcursionCommand, labelExcursion } from "./label-excursion.ts";
export { hearLaboratory, withEarlierPairs } from "./laboratory.ts";
export type { Note } from "./notes.ts";
export { hearProcessState, type ProcessJudgement, suppressionEvent } from "./process-state.ts";
export { explainedOf, Scorer } from "./scorer.ts";
export { freshState, type StreamState } from "./state.ts";
export type { ValidityRules } from "./validity.ts";
export { grouped, rangeWords, readingWords, short } from "./words.ts";
