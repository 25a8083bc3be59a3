export { AccountBuilder, isOneSided, type Run, type TrustedValues, type WantedProperty } from "./account-builder.ts";
export {
  decideHandover,
  type HandoverAnswer,
  type HandoverAsk,
  type HandoverBooks,
  meanings,
  recordHash,
} from "./decide.ts";
export { entryText, entryTitle, entryWords } from "./entry-words.ts";
export { type ShiftCalendar, shiftCalendar, unstaffed } from "./shift-calendar.ts";
export { calendarDays, checkShiftPlan, type ShiftPlan, ShiftPlanError, ShiftPlanSchema } from "./shift-plan.ts";
export { checksFor, type RequiredCheck, type ShiftFacts, shiftRecord } from "./shift-record.ts";
export { type HandoverStanding, handoverStanding } from "./standing.ts";
