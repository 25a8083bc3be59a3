export { type ShiftCalendar, shiftCalendar, unstaffed } from "./shift-calendar.ts";
export { calendarDays, checkShiftPlan, type ShiftPlan, ShiftPlanError, ShiftPlanSchema } from "./shift-plan.ts";
