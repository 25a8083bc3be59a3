import type { OpenAlarm, RecordedEvent, SetAsideAlarm, ShiftRecord } from "../messages/index.ts";

/** Most urgent first; "record only" calls nobody. */
export const priorityOrder = ["high", "medium", "low", "record only"];

/**
 * What stood open at a moment, replayed from the events before it: alarms in any state but normal, and those that annunciate nothing.
 *
 * @param events of alarms, in the order of the record; they may begin anywhere, but what stood open before them is not known
 */
export function openAlarmsAt(events: readonly RecordedEvent[], at: number): Omit<ShiftRecord["open"], "excursions"> {
  const open = new Map<string, OpenAlarm>();
  const setAside = new Map<string, SetAsideAlarm>();
  for (const event of events) {
    if (event.at > at) continue;
    const key = event.alarm?.key ?? event.setAside?.key ?? event.key;
    if (key === undefined) continue;
    const id = `${event.stream}/${key}`;
    put(open, id, isOpen(event) ? event.alarm : undefined);
    put(setAside, id, isSetAside(event) ? event.setAside : undefined);
  }
  return {
    alarms: [...open.values()].sort((a, b) => rank(a) - rank(b) || b.raisedAt - a.raisedAt),
    setAside: [...setAside.values()].sort((a, b) => rank(a) - rank(b)),
  };
}

function put<T>(map: Map<string, T>, id: string, value: T | undefined): void {
  if (value === undefined) map.delete(id);
  else map.set(id, value);
}

/** In recorded history nobody could answer an alarm: what has returned there, or where the history ends, waits for nobody. */
function isOpen({ kind, alarm, history }: RecordedEvent): boolean {
  if (kind === "alarm left open by history" || kind === "alarm removed") return false;
  if (history && kind === "alarm cleared") return false;
  return alarm !== undefined && alarm.state !== "normal" && alarm.priority !== "record only";
}

/** The event that ends the last way of being set aside shows the alarm as it was before; where another still holds, as it is after. */
function isSetAside({ kind, setAside }: RecordedEvent): boolean {
  if (!setAside) return false;
  if (kind === "alarm unshelved") return setAside.shelved === undefined;
  if (kind === "alarm returned to service") return setAside.outOfService === undefined;
  if (kind === "alarm suppression ended") return setAside.suppressed === undefined;
  return true;
}

function rank({ priority }: { priority: string }): number {
  return priorityOrder.indexOf(priority);
}
