import type { AlarmCommand } from "../../core/alarms/index.ts";
import { commandAlarm, type Note } from "../../core/judging/index.ts";
import type { EngineStream } from "./streams.ts";

type AlarmAsk<Asked> = Asked extends AlarmCommand ? Omit<Asked, "at"> & { stream: string; key: string } : never;

/** What a person asks of one stream's alarms. The engine gives it its time. */
export type StreamCommand = AlarmAsk<AlarmCommand>;

/** What came of a command: the stream as it is then, what goes on record, and why it was rejected, if it was. */
export interface Carried {
  state: EngineStream["state"];
  notes: Note[];
  rejected?: string;
}

/** Carries out a command on its stream at `now`, wall clock. Pure. */
export function carryOut({ state, rules }: EngineStream, command: StreamCommand, now: number): Carried {
  const { stream: _, key, ...asked } = command;
  return commandAlarm(state, key, { ...asked, at: now } as AlarmCommand, rules);
}
