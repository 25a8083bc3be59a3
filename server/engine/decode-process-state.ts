import { checker, type ProcessState, ProcessStateMessageSchema, shown } from "../../core/messages/index.ts";
import { parsePayload, timeOf } from "./decode.ts";

export type DecodedState = { kind: "state"; state: ProcessState } | { kind: "refused"; says: string };

/** A state, its grade and a time are a hundred bytes or so. */
const mostBytes = 16 * 1024;
const message = checker(ProcessStateMessageSchema);

/** Decodes what the plant says of a line, in JSON or CBOR as a reading may be. Never throws for what comes from outside. */
export function decodeProcessState(payload: Uint8Array): DecodedState {
  if (payload.length > mostBytes) return refused(`${payload.length} bytes, at most ${mostBytes} are taken`);
  const parsed = parsePayload(payload);
  if ("says" in parsed) return refused(parsed.says);
  const { value } = parsed;
  const wrong = message.mismatch(value);
  if (wrong || !message.is(value)) {
    return refused(`${wrong?.field || "the message"} is ${wrong?.got ?? shown(value)}, expected: ${wrong?.expected}`);
  }
  const since = timeOf(value.time);
  if (typeof since === "string") return refused(since);
  const { state, grade } = value;
  return { kind: "state", state: { state, since, ...(grade === undefined ? {} : { grade }) } };
}

function refused(says: string): DecodedState {
  return { kind: "refused", says: `process state: ${says}` };
}
