export { AccountBuilder, isOneSided, type Run, type TrustedValues, type WantedProperty } from "./account-builder.ts";
export {
  decideHandover,
  type HandoverAnswer,
  type HandoverAsk,
  type HandoverBooks,
} from "./decide.ts";
export { type Drawn, drawn, recordHash } from "./drawn.ts";
export { type LabFacts, labLines } from "./lab-lines.ts";
export { type ShiftCalendar, shiftCalendar, unstaffed } from "./shift-calendar.ts";
export { calendarDays, checkShiftPlan, type ShiftPlan, ShiftPlanError, ShiftPlanSchema } from "./shift-plan.ts";
export { checksFor, type RequiredCheck, type ShiftFacts, shiftRecord } from "./shift-record.ts";
