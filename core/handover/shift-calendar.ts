import { Temporal } from "temporal-polyfill";
import type { Shift } from "../messages/index.ts";
import { checkShiftPlan, minutesOf, type ShiftKind, type ShiftPlan, ShiftPlanError, weekdays } from "./shift-plan.ts";

export interface ShiftCalendar {
  /** The shift in which a moment lies. */
  at(time: number): Shift;
  before(shift: Shift): Shift;
  after(shift: Shift): Shift;
}

export const unstaffed = "No shift";

/** A plan has a shift at least once a week. A day more, for zones that once left out a whole day. */
const searchDays = 8;

/**
 * The shifts of a plan in a plant's time zone. A shift begins and ends when the clock on the wall shows its times, so that it lasts an hour
 * less or more when that clock is put forward or back. A time that the clock leaves out stands for the moment of the change, one that it
 * shows twice for the first: neighbours always meet.
 *
 * @param timeZone of the IANA time zone data
 * @throws ShiftPlanError for shifts that overlap, or for a zone or day that does not exist
 */
export function shiftCalendar(plan: ShiftPlan, timeZone: string): ShiftCalendar {
  checkShiftPlan(plan);
  const rotationFrom = plan.rotationFrom === undefined ? undefined : dateOf(plan.rotationFrom);
  checkZone(timeZone);

  /** The shifts that begin on a day, in their order. One that the change of the clock leaves no time is left out. */
  function on(date: Temporal.PlainDate): Shift[] {
    return plan.shifts
      .filter(({ days }) => days === undefined || days.includes(weekdays[date.dayOfWeek - 1]))
      .map((kind) => shiftOn(date, kind, timeZone, rotationFrom))
      .filter(({ from, to }) => to > from)
      .sort((a, b) => a.from - b.from);
  }

  function at(time: number): Shift {
    const date = Temporal.Instant.fromEpochMilliseconds(Math.floor(time)).toZonedDateTimeISO(timeZone).toPlainDate();
    const begun = find(date, -1, (shifts) => shifts.findLast(({ from }) => from <= time));
    if (time < begun.to) return begun;
    const next = find(date, 1, (shifts) => shifts.find(({ from }) => from > time));
    return { from: begun.to, to: next.from, name: unstaffed, staffed: false };
  }

  /** Looks day by day; a shift may be dated a day beside the moment where the clock leaves out a whole day. */
  function find(date: Temporal.PlainDate, step: 1 | -1, look: (shifts: Shift[]) => Shift | undefined): Shift {
    for (let days = -1; days <= searchDays; days++) {
      const found = look(on(date.add({ days: step * days })));
      if (found) return found;
    }
    throw new Error(`no shift within ${searchDays} days of ${date}: the plan was not checked`);
  }

  return { at, before: ({ from }) => at(from - 1), after: ({ to }) => at(to) };
}

function shiftOn(
  date: Temporal.PlainDate,
  { name, from, to, teams }: ShiftKind,
  timeZone: string,
  rotationFrom: Temporal.PlainDate | undefined,
): Shift {
  const last = minutesOf(to) > minutesOf(from) ? date : date.add({ days: 1 });
  const team = teams?.[turn(teams.length, date, rotationFrom)];
  return {
    from: momentOf(date, from, timeZone),
    to: momentOf(last, to, timeZone),
    name,
    ...(team === undefined ? {} : { team }),
    staffed: true,
  };
}

function turn(teams: number, date: Temporal.PlainDate, rotationFrom: Temporal.PlainDate | undefined): number {
  if (!rotationFrom) return 0;
  const days = rotationFrom.until(date, { largestUnit: "days" }).days;
  return ((days % teams) + teams) % teams;
}

/** When the wall's clock shows `timeOfDay` on that day, epoch ms. */
function momentOf(date: Temporal.PlainDate, timeOfDay: string, timeZone: string): number {
  const wanted = date.toPlainDateTime(Temporal.PlainTime.from(timeOfDay));
  const found = wanted.toZonedDateTime(timeZone, { disambiguation: "compatible" });
  if (found.toPlainDateTime().equals(wanted)) return found.epochMilliseconds;
  // The clock was put forward over it: "compatible" is then later than the change by as much as the time lay within the gap.
  return found.add({ milliseconds: 1 }).getTimeZoneTransition("previous")!.epochMilliseconds;
}

function dateOf(text: string): Temporal.PlainDate {
  try {
    return Temporal.PlainDate.from(text, { overflow: "reject" });
  } catch (cause) {
    throw new ShiftPlanError(`rotationFrom is "${text}", expected a day that exists, year-month-day. Correct it.`, {
      cause,
    });
  }
}

function checkZone(timeZone: string): void {
  try {
    Temporal.Instant.fromEpochMilliseconds(0).toZonedDateTimeISO(timeZone);
  } catch (cause) {
    throw new ShiftPlanError(
      `the time zone is "${timeZone}", expected a zone of the IANA time zone data, such as "Europe/Oslo". Correct it.`,
      { cause },
    );
  }
}
