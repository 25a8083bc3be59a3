import { checker, type LabMessage, LabMessageSchema } from "../../core/messages/index.ts";
import { timeOf } from "./decode.ts";
import { checkedMessage, decodeMessage } from "./decode-message.ts";

/** A laboratory result with its time in epoch ms. */
export type LabEntry = LabMessage & { time: number };
export type DecodedLab = { kind: "result"; entry: LabEntry } | { kind: "refused"; says: string };

const message = checker(LabMessageSchema);

/** Decodes a laboratory result, in JSON or CBOR as a reading may be. Never throws for what comes from outside. */
export function decodeLab(payload: Uint8Array): DecodedLab {
  return entryOf(decodeMessage(payload, message));
}

/** A result from its parsed form: an item of recorded history, a row of a table. */
export function labEntryOf(value: unknown): DecodedLab {
  return entryOf(checkedMessage(value, message));
}

function entryOf(decoded: ReturnType<typeof decodeMessage<LabMessage>>): DecodedLab {
  if ("says" in decoded) return { kind: "refused", says: decoded.says };
  const time = timeOf(decoded.value.time);
  if (typeof time === "string") return { kind: "refused", says: time };
  return { kind: "result", entry: { ...decoded.value, time } };
}
