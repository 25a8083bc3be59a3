import type { PlantTime } from "./plant-time.ts";

const minuteMs = 60_000;
const dayMs = 24 * 60 * minuteMs;
/** how the field asks for it */
export const typedTimeForm = "2026-12-01 14:05";

/**
 * The moment that a person typed by the plant's clock: "2026-12-01 14:05", with seconds or without; "2026-12-01" is its beginning; "14:05"
 * alone is today's; "now". undefined for anything else, and for a time that no clock of the plant ever shows (the hour that is left out when
 * the clocks go forward). Of the two moments of a repeated hour it is the first.
 */
export function typedTime(text: string, time: Pick<PlantTime, "offsetMs">, now: number): number | undefined {
  const typed = text.trim().toLowerCase();
  if (typed === "now") return now;
  const parts = /^(?:(\d{4})-(\d{1,2})-(\d{1,2}))?[ t]*(?:(\d{1,2}):(\d{2})(?::(\d{2}))?)?$/.exec(typed);
  if (!parts || typed === "") return undefined;
  const [year, month, day, hour, minute, second] = parts.slice(1).map((part) => Number(part ?? 0));
  const today = Math.floor((now + time.offsetMs(now)) / dayMs) * dayMs;
  const date = parts[1] === undefined ? today : Date.UTC(year, month - 1, day);
  const isDate = parts[1] === undefined || new Date(date).getUTCDate() === day;
  if (!isDate || month > 12 || hour > 23 || minute > 59 || second > 59) return undefined;
  return momentOf(date + (hour * 60 + minute) * minuteMs + second * 1000, time);
}

/** The first moment at which the plant's clock shows `wall` (written as if it were UTC). */
function momentOf(wall: number, { offsetMs }: Pick<PlantTime, "offsetMs">): number | undefined {
  // Zones are at most 14 h ahead of UTC and 12 h behind; the two offsets of a change of the clocks are among these.
  const offsets = [offsetMs(wall - 14 * 60 * minuteMs), offsetMs(wall + 14 * 60 * minuteMs), offsetMs(wall)];
  const moments = offsets.map((offset) => wall - offset).filter((at) => at + offsetMs(at) === wall);
  return moments.length > 0 ? Math.min(...moments) : undefined;
}
