import type { RecordedEvent } from "../../core/messages/index.ts";
import type { StoreReader } from "../store/store.ts";

const day = 24 * 3_600_000;
/** How long before a shift an alarm may have been raised and still be known to stand in it. */
const lookBackMs = 30 * day;
/** What is set aside may stay so for long: a line that is shut down, an analyzer that is away for repair. */
const setAsideLookBackMs = 400 * day;
const settingAside = [
  "alarm taken out of service",
  "alarm returned to service",
  "alarm suppressed",
  "alarm suppression ended",
];

/** Events of alarms before a moment, as far back as what stands open at it may go; in the order of the record. */
export function alarmsKnownBefore(store: StoreReader, at: number): RecordedEvent[] {
  const since = at - lookBackMs;
  const long = settingAside.flatMap((kind) => store.eventsOfKind(kind, at - setAsideLookBackMs, since));
  return [...long.sort((a, b) => a.cursor - b.cursor), ...store.alarmEvents({ from: since, to: at, history: true })];
}
