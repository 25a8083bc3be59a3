/** Every time on the screens is the plant's time. One of these is made for the plant's zone and handed down. */
export interface PlantTime {
  readonly zone: string;
  /** minutes that the zone is ahead of UTC at `at`, as ms */
  offsetMs(at: number): number;
  /** "18:42:07" */
  clock(at: number): string;
  /** "18:42", with the date before it where that is not the day of `now`: "2 Dec 18:42" */
  brief(at: number, now: number): string;
  /** as `brief`, to the second */
  exact(at: number, now: number): string;
  /** "2 Dec" */
  day(at: number): string;
  /** "2026-12-01 18:42:07 UTC+1": for hovering, tables and exports */
  full(at: number): string;
  /** "UTC+1", as it holds at `at` */
  zoneName(at: number): string;
}

const pad = (value: number) => String(value).padStart(2, "0");
const months = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];
const hourMs = 3_600_000;
const minus = "−";

/** @param zone an IANA name, as GET /api/v1/plant gives it; a RangeError for one that the browser does not know */
export function plantTime(zone: string): PlantTime {
  const format = new Intl.DateTimeFormat("en-GB", {
    timeZone: zone,
    hourCycle: "h23",
    year: "numeric",
    month: "numeric",
    day: "numeric",
    hour: "numeric",
    minute: "numeric",
    second: "numeric",
  });
  // An offset changes on a quarter of an hour at the most often, and asking Intl costs more than drawing a lane.
  const known = new Map<number, number>();

  function offsetMs(at: number): number {
    const quarter = Math.floor(at / (hourMs / 4));
    const before = known.get(quarter);
    if (before !== undefined) return before;
    const part: Record<string, number> = {};
    for (const { type, value } of format.formatToParts(quarter * (hourMs / 4))) part[type] = Number(value);
    const wall = Date.UTC(part["year"], part["month"] - 1, part["day"], part["hour"], part["minute"], part["second"]);
    const offset = wall - quarter * (hourMs / 4);
    if (known.size > 5000) known.clear();
    known.set(quarter, offset);
    return offset;
  }

  /** A Date whose UTC fields read as the plant's wall clock. */
  const wall = (at: number) => new Date(at + offsetMs(at));
  const clock = (at: number) => {
    const time = wall(at);
    return `${pad(time.getUTCHours())}:${pad(time.getUTCMinutes())}:${pad(time.getUTCSeconds())}`;
  };
  const day = (at: number) => `${wall(at).getUTCDate()} ${months[wall(at).getUTCMonth()]}`;
  const dated = (at: number, now: number, text: string) => {
    const here = wall(at);
    const there = wall(now);
    if (here.toISOString().slice(0, 10) === there.toISOString().slice(0, 10)) return text;
    const year = here.getUTCFullYear() === there.getUTCFullYear() ? "" : ` ${here.getUTCFullYear()}`;
    return `${day(at)}${year} ${text}`;
  };
  const zoneName = (at: number) => {
    const minutes = Math.round(offsetMs(at) / 60_000);
    if (minutes === 0) return "UTC";
    const rest = Math.abs(minutes) % 60;
    return `UTC${minutes < 0 ? minus : "+"}${Math.floor(Math.abs(minutes) / 60)}${rest ? `:${pad(rest)}` : ""}`;
  };
  return {
    zone,
    offsetMs,
    clock,
    day,
    zoneName,
    brief: (at, now) => dated(at, now, clock(at).slice(0, 5)),
    exact: (at, now) => dated(at, now, clock(at)),
    full: (at) => `${wall(at).toISOString().slice(0, 10)} ${clock(at)} ${zoneName(at)}`,
  };
}
