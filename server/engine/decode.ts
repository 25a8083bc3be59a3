import { Decoder } from "cbor-x";
import { checker, type Reading, ReadingEnvelopeSchema, shown } from "../../core/messages/index.ts";

export type Decoded =
  | { kind: "reading"; reading: Reading }
  | { kind: "refused"; reason: "malformed" | "too large"; says: string };

/** 65 536 values of float64 take 512 kB, as JSON text four times that: what is larger is no reading. */
const mostBytes = 4 * 1024 * 1024;
const mostValues = 65_536;

/** Years 2000 to 2100: a time outside is a clock that was never set, or another unit. */
const earliest = Date.UTC(2000, 0, 1);
const latest = Date.UTC(2100, 0, 1);

const rfc3339 = /^\d{4}-\d{2}-\d{2}[Tt ]\d{2}:\d{2}:\d{2}(\.\d+)?([Zz]|[+-]\d{2}:\d{2})$/;
const envelope = checker(ReadingEnvelopeSchema);
const utf8 = new TextDecoder("utf-8", { fatal: true });
const cbor = new Decoder({ useRecords: false, mapsAsObjects: true });

/** Decodes a reading in JSON or CBOR (RFC 8949, typed arrays of RFC 8746), told apart by the first byte. Never throws for what comes from outside. */
export function decodeReading(payload: Uint8Array): Decoded {
  if (payload.length > mostBytes) {
    return { kind: "refused", reason: "too large", says: `${payload.length} bytes, at most ${mostBytes} are taken` };
  }
  const parsed = parsePayload(payload);
  return "says" in parsed ? malformed(parsed.says) : readingOf(parsed.value);
}

/** A reading from its parsed form (a line of JSON, an item of CBOR). */
export function readingOf(value: unknown): Decoded {
  if (typeof value !== "object" || value === null || Array.isArray(value)) {
    return malformed(`${shown(value)}, expected an object with time, sequence and values`);
  }
  const fields = value as Record<string, unknown>;
  const timed = fields.time instanceof Date ? { ...fields, time: fields.time.getTime() } : fields;
  const wrong = envelope.mismatch(timed);
  if (wrong) return malformed(`${wrong.field || "the reading"} is ${wrong.got}, expected: ${wrong.expected}`);
  const { time: stamp, sequence, axis, quality, context } = timed as Parameters<typeof keepEnvelope>[0];
  const time = timeOf(stamp);
  if (typeof time === "string") return malformed(time);
  const values = valuesOf(fields.values);
  if (typeof values === "string") return malformed(values);
  return {
    kind: "reading",
    reading: { time, sequence, values, ...keepEnvelope({ time, sequence, axis, quality, context }) },
  };
}

function keepEnvelope(fields: {
  time: number | string;
  sequence: number;
  axis?: Reading["axis"];
  quality?: Reading["quality"];
  context?: Reading["context"];
}): Pick<Reading, "axis" | "quality" | "context"> {
  const { axis, quality, context } = fields;
  return { ...(axis && { axis }), ...(quality && { quality }), ...(context && { context }) };
}

/** The value that a payload holds, in JSON or CBOR; told apart by the first byte. */
export function parsePayload(payload: Uint8Array): { value: unknown } | { says: string } {
  const first = payload[0];
  try {
    if (first === 0x7b) return { value: JSON.parse(utf8.decode(payload)) };
    // A CBOR map, or one behind the self-describing tag 55799 (RFC 8949 §3.4.6).
    if ((first >= 0xa0 && first <= 0xbf) || first === 0xd9) return { value: cbor.decode(payload) };
  } catch (error) {
    return { says: `${first === 0x7b ? "no JSON" : "no CBOR"}: ${(error as Error).message}` };
  }
  const begins = first === undefined ? "is empty" : `begins with byte 0x${first.toString(16).padStart(2, "0")}`;
  return { says: `the payload ${begins}, expected { (JSON) or 0xa0–0xbf (a CBOR map)` };
}

/** Epoch ms of a time in either form, or the sentence that says why it is none. */
export function timeOf(stamp: number | string): number | string {
  if (typeof stamp === "string" && !rfc3339.test(stamp)) {
    return `time is ${shown(stamp)}, expected RFC 3339 with an offset (2026-05-14T18:42:07Z) or epoch milliseconds`;
  }
  const time = Math.round(typeof stamp === "string" ? Date.parse(stamp.replace(" ", "T")) : stamp);
  if (!(time >= earliest && time < latest)) {
    return `time is ${shown(stamp)}, expected a time between 2000 and 2100 (epoch time is in milliseconds)`;
  }
  return time;
}

function valuesOf(values: unknown): Float64Array | string {
  if (ArrayBuffer.isView(values) && !(values instanceof DataView) && !Buffer.isBuffer(values)) {
    const typed = values as Float64Array | Float32Array | Int32Array | BigInt64Array;
    if (typed.length === 0 || typed.length > mostValues) return lengthWords(typed.length);
    if (typed instanceof BigInt64Array || (typed as object) instanceof BigUint64Array) {
      return Float64Array.from(typed as BigInt64Array, Number);
    }
    return Float64Array.from(typed as Float64Array);
  }
  if (!Array.isArray(values)) {
    return `values is ${shown(values)}, expected a list of numbers or a typed array of 8 to 64 bits (RFC 8746)`;
  }
  if (values.length === 0 || values.length > mostValues) return lengthWords(values.length);
  const out = new Float64Array(values.length);
  for (let j = 0; j < values.length; j++) {
    const value: unknown = values[j];
    // null is how JSON writers spell NaN: it goes on as one, and is refused by name as "not finite"
    if (typeof value !== "number" && value !== null) return `values[${j}] is ${shown(value)}, expected a number`;
    out[j] = value ?? Number.NaN;
  }
  return out;
}

function lengthWords(length: number): string {
  return `values is a list of ${length}, expected 1 to ${mostValues} numbers`;
}

function malformed(says: string): Decoded {
  return { kind: "refused", reason: "malformed", says };
}
