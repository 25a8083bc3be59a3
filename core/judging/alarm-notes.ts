import { type AlarmRecord, type AlarmState, isSetAside, stateWord } from "../alarms/index.ts";
import type { AlarmRule } from "../limit-set/index.ts";
import type { OpenAlarm, SetAsideAlarm } from "../messages/index.ts";
import type { Note } from "./notes.ts";

/** The alarm before and after a step of its lifecycle. */
interface Turned {
  before: AlarmState | undefined;
  after: AlarmState | undefined;
}

/** A record of an alarm's lifecycle as an entry of the stream's record. */
export function alarmNote(stream: string, rule: AlarmRule, record: AlarmRecord, turned: Turned): Note {
  const by = "by" in record && record.by !== undefined ? { by: record.by } : {};
  const kind = record.kind === "rejected" ? "command rejected" : `alarm ${record.kind}`;
  return { at: record.at, stream, kind, says: words(rule, record), ...by, ...shownIn(stream, rule, record, turned) };
}

function shownIn(
  stream: string,
  rule: AlarmRule,
  record: AlarmRecord,
  { before, after }: Turned,
): Pick<Note, "alarm" | "setAside"> {
  switch (record.kind) {
    case "raised":
    case "raised again":
    case "annunciated anew":
    case "cleared":
    case "acknowledged":
    case "reset": {
      const state = after ?? before;
      if (!state?.activation) return {};
      return { alarm: { ...openAlarmOf(stream, rule, state), state: stateWord(after), ...last(record) } };
    }
    case "rejected":
      return {};
    default: {
      const state = isSetAside(after) ? after : before;
      return state ? { setAside: setAsideOf(stream, rule, state) } : {};
    }
  }
}

/** The note shows the alarm as it is after the record, also when it is normal again and gone from the state. */
function last(record: AlarmRecord): Partial<OpenAlarm> {
  if (record.kind === "cleared") return { clearedAt: record.at };
  if (record.kind === "acknowledged") return { acknowledgedAt: record.at, acknowledgedBy: record.by };
  return {};
}

function words({ title }: AlarmRule, record: AlarmRecord): string {
  switch (record.kind) {
    case "raised":
    case "raised again":
      return `${title}: ${record.says}`;
    case "annunciated anew":
      return `${title}: annunciated anew, its condition holds. ${record.says}`;
    case "raised unannounced":
      return `${title}: came while set aside, so nobody was called. ${record.says}`;
    case "cleared":
      return `${title}: back to normal.`;
    case "cleared unannounced":
      return `${title}: back to normal while set aside.`;
    case "acknowledged":
      return `${title}: acknowledged by ${record.by}${noted(record.note)}.`;
    case "reset":
      return `${title}: reset by ${record.by}${noted(record.note)}.`;
    case "shelved":
      return `${title}: shelved ${record.once ? "for this activation" : "for a time"} by ${record.by}: ${record.reason}.`;
    case "taken out of service":
      return `${title}: taken out of service by ${record.by}: ${record.reason}.`;
    case "unshelved":
    case "returned to service":
      return record.by === undefined
        ? `${title}: ${record.kind}: ${record.why}.`
        : `${title}: ${record.kind} by ${record.by}${noted(record.note)}.`;
    case "suppressed":
      return `${title}: suppressed by design while the process is ${record.state}.`;
    case "suppression ended":
      return `${title}: no longer suppressed; the process has left ${record.state}.`;
    case "rejected":
      return `${title}: ${record.command} by ${record.by} rejected: ${record.why}.`;
    default:
      return record satisfies never;
  }
}

function noted(note: string | undefined): string {
  return note === undefined ? "" : `: ${note}`;
}

/** An alarm that is annunciated, as it is shown. */
export function openAlarmOf(stream: string, rule: AlarmRule, state: AlarmState): OpenAlarm {
  const { activation, times, clearedAt, acknowledgedAt, acknowledgedBy } = state;
  return {
    stream,
    key: rule.key,
    title: rule.title,
    priority: rule.priority,
    state: stateWord(state),
    ...activation!,
    ...(clearedAt === undefined ? {} : { clearedAt }),
    ...(acknowledgedAt === undefined ? {} : { acknowledgedAt }),
    ...(acknowledgedBy === undefined ? {} : { acknowledgedBy }),
    ...(times > 1 ? { times } : {}),
    ...(rule.latching ? { latching: true } : {}),
    ...rule.purpose,
  };
}

/** An alarm that is shelved, suppressed by design or out of service, as it is shown. */
export function setAsideOf(stream: string, rule: AlarmRule, state: AlarmState): SetAsideAlarm {
  const { active, activation, shelved, suppressed, outOfService } = state;
  return {
    stream,
    key: rule.key,
    title: rule.title,
    priority: rule.priority,
    state: stateWord(state),
    active,
    ...(activation ? { since: activation.since, says: activation.says } : {}),
    ...(shelved ? { shelved } : {}),
    ...(suppressed ? { suppressed } : {}),
    ...(outOfService ? { outOfService } : {}),
    ...rule.purpose,
  };
}
