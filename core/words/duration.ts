const second = 1000;
const minute = 60 * second;
const hour = 60 * minute;
const day = 24 * hour;

const two = (big: number, bigUnit: string, small: number, smallUnit: string) =>
  small === 0 ? `${big} ${bigUnit}` : `${big} ${bigUnit} ${small} ${smallUnit}`;

/** A length of time in the two units that matter: "38 s", "4 min 10 s", "3 h 20 min", "2 d 5 h". Negative counts as nothing. */
export function duration(ms: number): string {
  const seconds = Math.max(0, Math.floor(ms / second));
  if (seconds < 60) return `${seconds} s`;
  if (ms < 10 * minute) return two(Math.floor(seconds / 60), "min", seconds % 60, "s");
  if (ms < hour) return `${Math.floor(ms / minute)} min`;
  if (ms < day) return two(Math.floor(ms / hour), "h", Math.floor((ms % hour) / minute), "min");
  return two(Math.floor(ms / day), "d", Math.floor((ms % day) / hour), "h");
}

/** The period of a stream: "2 s", "0.5 s", "5 min". */
export function period(ms: number): string {
  return ms < 60 * second ? `${Number((ms / second).toPrecision(2))} s` : duration(ms);
}
