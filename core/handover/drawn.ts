import { sha256 } from "@noble/hashes/sha2.js";
import { bytesToHex, utf8ToBytes } from "@noble/hashes/utils.js";
import type { ShiftRecord } from "../messages/index.ts";
import { canonicalJson } from "../model/index.ts";

/** A record as it is to be signed: its canonical JSON, and the SHA-256 of that, 64 hexadecimal digits. */
export interface Drawn {
  hash: string;
  json: string;
}

export function drawn(record: ShiftRecord): Drawn {
  const json = canonicalJson(record);
  return { hash: recordHash(json), json };
}

/** What a signed record is known by. */
export function recordHash(json: string): string {
  return bytesToHex(sha256(utf8ToBytes(json)));
}
