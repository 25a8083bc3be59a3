import { Encoder } from "cbor-x";
import { describe, expect, test } from "vitest";
import { decodeReading } from "../../server/engine/decode.ts";

const cbor = new Encoder({ useRecords: false });
const time = Date.UTC(2026, 4, 14, 18, 42, 7);
const good = { time, sequence: 7, values: [0.5, 0.25, 1] };

function refusalOf(payload: Uint8Array | string | object): string {
  const bytes =
    payload instanceof Uint8Array
      ? payload
      : Buffer.from(typeof payload === "string" ? payload : JSON.stringify(payload));
  const decoded = decodeReading(bytes);
  return decoded.kind === "refused" ? `${decoded.reason}: ${decoded.says}` : "taken";
}

describe("a reading is decoded", () => {
  const expected = { kind: "reading", reading: { time, sequence: 7, values: Float64Array.of(0.5, 0.25, 1) } };
  test.each<[string, Uint8Array]>([
    ["JSON with epoch milliseconds", Buffer.from(JSON.stringify(good))],
    ["JSON with RFC 3339 and an offset", Buffer.from(JSON.stringify({ ...good, time: "2026-05-14T20:42:07+02:00" }))],
    ["CBOR with a plain array", cbor.encode(good)],
    ["CBOR with float32 (RFC 8746 tag 85)", cbor.encode({ ...good, values: Float32Array.from(good.values) })],
    ["CBOR with float64 (tag 86)", cbor.encode({ ...good, values: Float64Array.from(good.values) })],
    ["CBOR with a CBOR date (tag 1)", cbor.encode({ ...good, time: new Date(time) })],
  ])("from %s", (_, payload) => {
    expect(decodeReading(payload)).toEqual(expected);
  });

  // RFC 8746 §2.1: tag 81 is float32 big-endian; the bytes of 1, 0.5 written by hand.
  test("from CBOR with big-endian float32 (tag 81)", () => {
    const values = Buffer.from([0xd8, 0x51, 0x48, 0x3f, 0x80, 0, 0, 0x3f, 0, 0, 0]);
    const key = (text: string) => Buffer.from([0x60 + text.length, ...Buffer.from(text)]);
    const payload = Buffer.concat([
      Buffer.from([0xa3]),
      ...[key("time"), cbor.encode(time), key("sequence"), Buffer.from([7]), key("values"), values],
    ]);
    expect(decodeReading(payload)).toEqual({
      kind: "reading",
      reading: { time, sequence: 7, values: Float64Array.of(1, 0.5) },
    });
  });

  test("with its axis, quality and context", () => {
    const more = {
      axis: { unit: "nm", start: 1000, step: 4, count: 3 },
      quality: "uncertain",
      context: { grade: "dry" },
    };
    expect(decodeReading(Buffer.from(JSON.stringify({ ...good, ...more })))).toMatchObject({ reading: more });
  });

  test("null among the values is kept as NaN, to be refused by name when it is judged", () => {
    const decoded = decodeReading(Buffer.from('{"time":1778784127000,"sequence":1,"values":[1,null]}'));
    expect(decoded).toMatchObject({ kind: "reading", reading: { values: Float64Array.of(1, Number.NaN) } });
  });
});

describe("what cannot be a reading is refused with its reason", () => {
  test.each<[string, Uint8Array | string | object, RegExp]>([
    ["nothing", "", /^malformed: the payload is empty/],
    ["text", "hello", /^malformed: the payload begins with byte 0x68, expected \{/],
    ["half a JSON", '{"time": 1', /^malformed: no JSON/],
    ["bytes that are no UTF-8", Buffer.from([0x7b, 0x22, 0xff, 0x22]), /^malformed: no JSON/],
    ["half a CBOR", cbor.encode(good).subarray(0, 12), /^malformed: no CBOR/],
    [
      "a typed array whose bytes do not fill its elements",
      Buffer.from([0xa1, 0x61, 0x76, 0xd8, 0x55, 0x43, 0, 0, 1]),
      /^malformed: no CBOR/,
    ],
    ["a CBOR array", cbor.encode([1, 2]), /^malformed: the payload begins with byte 0x82/],
    ["no time", { sequence: 1, values: [1] }, /^malformed: time is missing/],
    [
      "a time without an offset",
      { ...good, time: "2026-05-14T18:42:07" },
      /^malformed: time is "2026-05-14T18:42:07", expected RFC 3339 with an offset/,
    ],
    [
      "epoch seconds",
      { ...good, time: 1778784127 },
      /^malformed: time is 1778784127, expected a time between 2000 and 2100/,
    ],
    ["a negative sequence", { ...good, sequence: -1 }, /^malformed: sequence is -1/],
    ["no values", { time, sequence: 1 }, /^malformed: values is missing/],
    ["a word among the values", { ...good, values: [1, "2"] }, /^malformed: values\[1\] is "2", expected a number/],
    ["no value at all", { ...good, values: [] }, /^malformed: values is a list of 0/],
    ["an axis in another unit", { ...good, axis: { unit: "eV", points: [1, 2] } }, /^malformed: axis/],
    ["a payload of 5 MB", Buffer.alloc(5 * 1024 * 1024, 0x7b), /^too large: 5242880 bytes/],
  ])("%s", (_, payload, expected) => {
    expect(refusalOf(payload)).toMatch(expected);
  });
});
