import type { AlarmCommand } from "../alarms/index.ts";
import { advanceAlarm } from "./advance-alarm.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import type { StreamState } from "./state.ts";

/** Somebody does something to an alarm. What is rejected changes nothing but goes on record all the same, with the reason. Pure. */
export function commandAlarm(
  state: StreamState,
  key: string,
  command: AlarmCommand,
  rules: StreamRules,
): { state: StreamState; notes: Note[]; rejected?: string } {
  const rule = rules.limitSet.alarms.find((candidate) => candidate.key === key);
  if (!rule) {
    const keys = rules.limitSet.alarms.map((candidate) => candidate.key).join(", ");
    const rejected = `${rules.stream} has no alarm "${key}"; it has ${keys || "none"}`;
    const { at, by, kind } = command;
    const says = `${kind} by ${by} rejected: ${rejected}.`;
    return { state, notes: [{ at, stream: rules.stream, kind: "command rejected", says, by }], rejected };
  }
  const { state: next, notes, records } = advanceAlarm(state, rule, command, rules);
  const refused = records.find((record) => record.kind === "rejected");
  return { state: next, notes, ...(refused ? { rejected: `${rule.title}: ${refused.why}` } : {}) };
}
