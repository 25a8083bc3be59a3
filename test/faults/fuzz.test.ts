import { existsSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { Encoder } from "cbor-x";
import { expect, test } from "vitest";
import { parseLabTable } from "../../core/agreement/index.ts";
import { MillraceError } from "../../core/errors.ts";
import { parseAlarmRules } from "../../core/limit-set/index.ts";
import { parseModel } from "../../core/model/index.ts";
import { seededRandom } from "../../core/pls/index.ts";
import { parseTable } from "../../core/spectrum/index.ts";
import { decodeReading } from "../../server/engine/decode.ts";
import { decodeLab } from "../../server/engine/decode-lab.ts";
import { decodeProcessState } from "../../server/engine/decode-process-state.ts";

const rounds = process.env.MILLRACE_FULL === "1" ? 1_000_000 : 30_000;
const seed = 20_261_201;
const random = seededRandom(seed);
const below = (n: number) => Math.floor(random() * n);

/** What is taken apart: something sound, and what reads it. The larger is read seldom: it costs the more. */
interface Target {
  name: string;
  sound: Buffer;
  read: (bytes: Buffer) => unknown;
  /** share of the rounds */
  weight: number;
}

const axis = { unit: "nm", start: 1000, step: 4, count: 30 };
const values = Float32Array.from({ length: 30 }, (_, i) => 0.4 + Math.sin(i) / 10);
const time = Date.UTC(2026, 4, 14);
const reading = { time, sequence: 7, values, axis, quality: "good", context: { temperature: 41.5, batch: "B-7" } };
const cbor = new Encoder({ useRecords: false, variableMapSize: true, tagUint8Array: false });
const json = (value: unknown) => Buffer.from(JSON.stringify(value));
const text = (read: (text: string) => unknown) => (bytes: Buffer) => read(bytes.toString("utf8"));
const modelFile = join(import.meta.dirname, "../../dist/test-models/bq-410.model.json");
const alarmsFile = join(import.meta.dirname, "../../simulator/brindle-quay/bq-305.alarms.json");
const table = ["sample,time,water,1000,1004,1008", "a,2026-05-14T18:42:07Z,3.5,0.1,0.2,0.3", 'b,"x ""y""",2,0.1,,0.3'];
const lab = { time: new Date(time).toISOString(), property: "water", value: 3.5, unit: "%", sample: "s-1" };

const targets: Target[] = [
  {
    name: "a reading in JSON",
    sound: json({ ...reading, values: Array.from(values) }),
    read: decodeReading,
    weight: 30,
  },
  { name: "a reading in CBOR", sound: cbor.encode(reading), read: decodeReading, weight: 40 },
  {
    name: "a process state",
    sound: json({ time, state: "cleaning", grade: "x" }),
    read: decodeProcessState,
    weight: 8,
  },
  {
    name: "a process state in CBOR",
    sound: cbor.encode({ time, state: "running" }),
    read: decodeProcessState,
    weight: 5,
  },
  { name: "a laboratory result", sound: json(lab), read: decodeLab, weight: 6 },
  { name: "a table", sound: Buffer.from(table.join("\n")), read: text((t) => parseTable(t, "t.csv", "nm")), weight: 6 },
  {
    name: "a laboratory table",
    sound: Buffer.from("time,property,value,unit\n2026-05-14T18:42:07Z,water,3,%\n"),
    read: text(parseLabTable),
    weight: 4,
  },
  {
    name: "alarm rules",
    sound: readFileSync(alarmsFile),
    read: text((t) => parseAlarmRules(t, "a.json", ["water"])),
    weight: 0.8,
  },
  {
    name: "a model",
    sound: existsSync(modelFile) ? readFileSync(modelFile) : Buffer.from("{}"),
    read: text((t) => parseModel(t, "m.json")),
    weight: 0.05,
  },
];

const interesting = [
  "null",
  "-1",
  "1e309",
  "9007199254740993",
  '""',
  "[]",
  "{}",
  '"__proto__"',
  "NaN",
  "\0",
  "\ud800",
  "[[[[[[[[[",
];

/** One way of spoiling a payload; several follow one another. */
const spoil: ((bytes: Buffer) => Buffer)[] = [
  (bytes) => {
    const copy = Buffer.from(bytes);
    copy[below(copy.length)] ^= 1 << below(8);
    return copy;
  },
  (bytes) => {
    const copy = Buffer.from(bytes);
    copy[below(copy.length)] = below(256);
    return copy;
  },
  (bytes) => bytes.subarray(0, below(bytes.length)),
  (bytes) => bytes.subarray(below(bytes.length)),
  (bytes) => cut(bytes, () => Buffer.alloc(0)),
  (bytes) => cut(bytes, (out) => Buffer.concat([out, out, out])),
  (bytes) => cut(bytes, () => Buffer.from(interesting[below(interesting.length)])),
  (bytes) => cut(bytes, (out) => Buffer.from(Array.from(out, () => below(256)))),
  (bytes) => Buffer.concat([bytes, Buffer.from([below(256)])]),
  // Lengths and nesting that say more than there is (RFC 8949 §3).
  (bytes) => cut(bytes, () => Buffer.from([0x9b, 0, 0, 0, below(256), 255, 255, 255, 255])),
  (bytes) => cut(bytes, () => Buffer.alloc(below(2000), 0x81)),
];

/** A stretch of up to 16 bytes replaced. */
function cut(bytes: Buffer, by: (out: Buffer) => Buffer): Buffer {
  const from = below(bytes.length + 1);
  const to = Math.min(bytes.length, from + 1 + below(16));
  return Buffer.concat([bytes.subarray(0, from), by(bytes.subarray(from, to)), bytes.subarray(to)]);
}

function spoiled(sound: Buffer): Buffer {
  let bytes = sound;
  for (let i = 1 + below(4); i > 0 && bytes.length > 0; i--) bytes = spoil[below(spoil.length)](bytes);
  return bytes;
}

function pick(): Target {
  let left = random() * targets.reduce((sum, { weight }) => sum + weight, 0);
  for (const target of targets) {
    left -= target.weight;
    if (left < 0) return target;
  }
  return targets[0];
}

test("what is taken apart is sound to begin with", () => {
  for (const { name, sound, read } of targets) {
    if (name.startsWith("a reading")) expect([name, read(sound)]).toMatchObject([name, { kind: "reading" }]);
    if (name === "alarm rules" || name === "a table" || name === "a model") continue;
    expect([name, read(sound)]).not.toMatchObject([name, { kind: "refused" }]);
  }
  expect(() => targets.find(({ name }) => name === "a model")!.read(readFileSync(modelFile))).not.toThrow();
});

test(`${rounds} spoiled payloads (seed ${seed}): each is read, refused, or thrown out with a sentence; none crashes, none takes long`, () => {
  const counts = new Map<string, { read: number; refused: number; thrown: number }>();
  let slowest = { ms: 0, name: "" };
  const before = process.memoryUsage().heapUsed;
  for (let i = 0; i < rounds; i++) {
    const { name, sound, read } = pick();
    const bytes = spoiled(sound);
    const count = counts.get(name) ?? { read: 0, refused: 0, thrown: 0 };
    counts.set(name, count);
    const began = performance.now();
    try {
      const outcome = read(bytes) as { kind?: string };
      if (outcome.kind === "refused" || outcome.kind === "unreadable") count.refused++;
      else count.read++;
    } catch (error) {
      if (!(error instanceof MillraceError)) {
        const what = `${name}, round ${i}: ${bytes.subarray(0, 400).toString("base64")}`;
        throw new Error(`thrown as no sentence of ours: ${(error as Error).stack}\n${what}`);
      }
      count.thrown++;
    }
    const ms = performance.now() - began;
    if (ms > slowest.ms) slowest = { ms, name };
  }
  console.log(JSON.stringify(Object.fromEntries(counts)), `slowest: ${slowest.name}, ${slowest.ms.toFixed(0)} ms`);
  for (const decoder of ["a reading in JSON", "a reading in CBOR", "a process state", "a laboratory result"]) {
    expect([decoder, counts.get(decoder)!.thrown]).toEqual([decoder, 0]);
  }
  // Some get through unharmed and some do not: else the fuzzer would prove nothing.
  expect(counts.get("a reading in CBOR")!.read).toBeGreaterThan(rounds / 100);
  expect(counts.get("a reading in CBOR")!.refused).toBeGreaterThan(rounds / 100);
  expect(slowest.ms).toBeLessThan(2000);
  expect((process.memoryUsage().heapUsed - before) / 1e6).toBeLessThan(400);
});
