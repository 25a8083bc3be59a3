import { sha256 } from "@noble/hashes/sha2.js";
import { bytesToHex, utf8ToBytes } from "@noble/hashes/utils.js";
import { canonicalJson } from "./canonical-json.ts";
import type { Model } from "./model.ts";

/** What a model is known by: the SHA-256 of its canonical JSON, 64 hexadecimal digits. White space and the order of keys do not matter. */
export function modelId(model: Model): string {
  return bytesToHex(sha256(utf8ToBytes(canonicalJson(model))));
}
