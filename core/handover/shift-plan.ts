import { type Static, Type } from "typebox";
import { MillraceError } from "../errors.ts";

export const weekdays = ["monday", "tuesday", "wednesday", "thursday", "friday", "saturday", "sunday"] as const;

/** A time of day as the clock on the plant's wall shows it. */
const TimeOfDaySchema = Type.String({ pattern: "^([01][0-9]|2[0-3]):[0-5][0-9]$" });

/** One kind of shift: when it begins and ends, on which days, and whose it is. */
export const ShiftKindSchema = Type.Object({
  name: Type.String({ minLength: 1, maxLength: 60 }),
  from: TimeOfDaySchema,
  /** at or before `from`: on the next day */
  to: TimeOfDaySchema,
  /** the days on which it begins; absent: every day */
  days: Type.Optional(Type.Array(Type.Enum(weekdays), { minItems: 1, uniqueItems: true })),
  /** whose it is, day after day from the plan's `rotationFrom` on, then over again; one team alone always has it */
  teams: Type.Optional(Type.Array(Type.String({ minLength: 1, maxLength: 60 }), { minItems: 1, maxItems: 400 })),
});
export type ShiftKind = Static<typeof ShiftKindSchema>;

/** The shifts of a plant. Together they may leave times without a shift, but never overlap. */
export const ShiftPlanSchema = Type.Object({
  shifts: Type.Array(ShiftKindSchema, { minItems: 1, maxItems: 50 }),
  /** the day on which every list of teams begins, year-month-day */
  rotationFrom: Type.Optional(Type.String({ pattern: "^[0-9]{4}-[0-9]{2}-[0-9]{2}$" })),
});
export type ShiftPlan = Static<typeof ShiftPlanSchema>;

/** For a plant that has set no shifts: every calendar day is one. */
export const calendarDays: ShiftPlan = { shifts: [{ name: "Calendar day", from: "00:00", to: "00:00" }] };

export class ShiftPlanError extends MillraceError {
  readonly code = "shift-plan";
}

const dayMinutes = 24 * 60;
const weekMinutes = 7 * dayMinutes;

/** Minutes since midnight by the clock on the wall. */
export function minutesOf(timeOfDay: string): number {
  const [hours, minutes] = timeOfDay.split(":").map(Number);
  return 60 * hours + minutes;
}

/**
 * Two shifts at one time would leave a reading to nobody or to both: such a plan is refused, and so is one whose teams begin on no day.
 *
 * @throws ShiftPlanError naming the shifts
 */
export function checkShiftPlan({ shifts, rotationFrom }: ShiftPlan): void {
  const rotating = shifts.find(({ teams }) => teams !== undefined && teams.length > 1);
  if (rotating && rotationFrom === undefined) {
    throw new ShiftPlanError(
      `${rotating.name} has ${rotating.teams!.length} teams in turn and rotationFrom is missing, expected the day on which the list begins. Give it as year-month-day.`,
    );
  }
  const stretches = shifts.flatMap(weekOf).sort((a, b) => a.start - b.start);
  stretches.forEach((stretch, i) => {
    const next = stretches[i + 1] ?? { ...stretches[0], start: stretches[0].start + weekMinutes };
    if (stretch.start + stretch.length <= next.start) return;
    throw new ShiftPlanError(
      `the shifts ${stretch.name} (to ${stretch.to}) and ${next.name} (from ${next.from}) overlap on ${weekdays[Math.floor((next.start % weekMinutes) / dayMinutes)]}, expected one shift at a time. Correct their times or days.`,
    );
  });
}

/** A kind's shifts in a week of the wall clock, minutes from Monday's midnight. */
function weekOf({ name, from, to, days }: ShiftKind) {
  const length = lengthMinutes(from, to);
  return weekdays.flatMap((day, i) =>
    days === undefined || days.includes(day)
      ? [{ name, from, to, length, start: i * dayMinutes + minutesOf(from) }]
      : [],
  );
}

function lengthMinutes(from: string, to: string): number {
  const length = minutesOf(to) - minutesOf(from);
  return length > 0 ? length : length + dayMinutes;
}
