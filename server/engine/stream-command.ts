import type { AlarmCommand } from "../../core/alarms/index.ts";
import { commandAlarm, type ExcursionCommand, labelExcursion, type Note } from "../../core/judging/index.ts";
import type { Excursion } from "../../core/messages/index.ts";
import type { EngineStream } from "./streams.ts";

type AlarmAsk<Asked> = Asked extends AlarmCommand ? Omit<Asked, "at"> & { stream: string; key: string } : never;

/** What a person asks of one stream's alarms and excursions. The engine gives it its time. */
export type StreamCommand = AlarmAsk<AlarmCommand> | (Omit<ExcursionCommand, "at"> & { stream: string });

/** What came of a command: the stream as it is then, what goes on record, and why it was rejected, if it was. */
export interface Carried {
  state: EngineStream["state"];
  notes: Note[];
  excursions: Excursion[];
  rejected?: string;
}

/**
 * Carries out a command on its stream at `now`, wall clock. Pure.
 *
 * @param recorded finds an excursion on record by its id
 */
export function carryOut(
  { state, rules }: EngineStream,
  command: StreamCommand,
  now: number,
  recorded: (id: string) => Excursion | undefined,
): Carried {
  if (command.kind === "label excursion") return labelExcursion(state, { ...command, at: now }, recorded, rules);
  const { stream: _, key, ...asked } = command;
  return { ...commandAlarm(state, key, { ...asked, at: now } as AlarmCommand, rules), excursions: [] };
}
