import { checker, type ProcessState, ProcessStateMessageSchema } from "../../core/messages/index.ts";
import { timeOf } from "./decode.ts";
import { decodeMessage } from "./decode-message.ts";

export type DecodedState = { kind: "state"; state: ProcessState } | { kind: "refused"; says: string };

const message = checker(ProcessStateMessageSchema);

/** Decodes what the plant says of a line, in JSON or CBOR as a reading may be. Never throws for what comes from outside. */
export function decodeProcessState(payload: Uint8Array): DecodedState {
  const decoded = decodeMessage(payload, message);
  if ("says" in decoded) return refused(decoded.says);
  const { time, state, grade } = decoded.value;
  const since = timeOf(time);
  if (typeof since === "string") return refused(since);
  return { kind: "state", state: { state, since, ...(grade === undefined ? {} : { grade }) } };
}

function refused(says: string): DecodedState {
  return { kind: "refused", says: `process state: ${says}` };
}
