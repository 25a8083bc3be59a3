import { type Checker, shown } from "../../core/messages/index.ts";
import { parsePayload } from "./decode.ts";

/** Messages of people and control systems are a hundred bytes or so. */
const mostBytes = 16 * 1024;

/** A small message in JSON or CBOR, by its schema; or the sentence that says what is wrong. Never throws for what comes from outside. */
export function decodeMessage<T>(payload: Uint8Array, message: Checker<T>): { value: T } | { says: string } {
  if (payload.length > mostBytes) return { says: `${payload.length} bytes, at most ${mostBytes} are taken` };
  const parsed = parsePayload(payload);
  return "says" in parsed ? parsed : checkedMessage(parsed.value, message);
}

/** The same for a message that is parsed already. */
export function checkedMessage<T>(value: unknown, message: Checker<T>): { value: T } | { says: string } {
  if (message.is(value)) return { value };
  const wrong = message.mismatch(value);
  return { says: `${wrong?.field || "the message"} is ${wrong?.got ?? shown(value)}, expected: ${wrong?.expected}` };
}
