import type { Excursion } from "../messages/index.ts";
import { duration, figure, withUnit } from "../words/index.ts";

/** "unfamiliar 14:05 to 14:17 (12 min), peak 3.4 × limit at 14:09; process change". */
export function excursionWords(
  { kind, start, end, peak, peakTime, unit, label }: Excursion,
  when: (at: number) => string,
): string {
  const span = end === undefined ? `since ${when(start)}` : `${when(start)} to ${when(end)} (${duration(end - start)})`;
  const named = label ? label.is : "not labelled";
  return `${kind} ${span}, peak ${withUnit(figure(peak, 2), unit)} at ${when(peakTime)}; ${named}`;
}
