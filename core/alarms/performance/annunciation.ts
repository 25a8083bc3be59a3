import type { Priority, RecordedEvent } from "../../messages/index.ts";

/** One alarm of one stream, as a list of figures names it. */
export interface NamedAlarm {
  stream: string;
  key: string;
  title: string;
  priority: Priority;
}

/** Once somebody was called: an entry into "unacknowledged". Times are epoch ms. */
export interface Annunciation extends NamedAlarm {
  at: number;
  acknowledgedAt?: number;
  clearedAt?: number;
}

/** A stretch in which an alarm's condition held, whether it was annunciated or not. */
export interface Stretch extends NamedAlarm {
  since: number;
  /** absent: it holds still */
  until?: number;
}

/** What a record of alarm events comes to, alarm by alarm. */
export interface AlarmHistory {
  /** in the order of their times */
  annunciations: Annunciation[];
  stretches: Stretch[];
  /** conditions that came while their alarm was set aside: nobody was called; their times */
  withheld: number[];
}

interface Following {
  annunciation?: Annunciation;
  stretch?: Stretch;
}

/**
 * Follows every alarm through its events. Only entries into "unacknowledged" are annunciations; what is for the record only is none, and
 * what came while an alarm was shelved, suppressed or out of service is counted apart.
 *
 * @param events in the order of the record; they may begin anywhere
 */
export function alarmHistory(events: readonly RecordedEvent[]): AlarmHistory {
  const history: AlarmHistory = { annunciations: [], stretches: [], withheld: [] };
  const followed = new Map<string, Following>();
  for (const event of events) {
    const shown = event.alarm ?? event.setAside;
    const key = shown?.key ?? event.key;
    if (event.stream === null || key === undefined || shown?.priority === "record only") continue;
    const id = `${event.stream}/${key}`;
    const before = followed.get(id) ?? {};
    const named = shown && { stream: event.stream, key, title: shown.title, priority: shown.priority };
    followed.set(id, follow(before, event, named, history));
  }
  history.annunciations.sort((a, b) => a.at - b.at);
  return history;
}

function follow(
  before: Following,
  { kind, at }: RecordedEvent,
  named: NamedAlarm | undefined,
  history: AlarmHistory,
): Following {
  switch (kind) {
    case "alarm raised":
    case "alarm raised again":
    case "alarm annunciated anew": {
      if (!named) return before;
      const annunciation = { ...named, at };
      history.annunciations.push(annunciation);
      return { annunciation, stretch: before.stretch ?? begun({ ...named, since: at }, history) };
    }
    case "alarm raised unannounced":
      if (!named) return before;
      history.withheld.push(at);
      return { stretch: before.stretch ?? begun({ ...named, since: at }, history) };
    case "alarm acknowledged":
      if (before.annunciation) before.annunciation.acknowledgedAt ??= at;
      return before;
    case "alarm cleared":
    case "alarm cleared unannounced":
    case "alarm removed":
    case "alarm left open by history":
      if (before.stretch) before.stretch.until = at;
      if (before.annunciation) before.annunciation.clearedAt ??= at;
      // One that returned unseen may still be acknowledged.
      return { annunciation: before.annunciation };
    default:
      return before;
  }
}

function begun(stretch: Stretch, { stretches }: AlarmHistory): Stretch {
  stretches.push(stretch);
  return stretch;
}
