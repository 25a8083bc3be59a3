import { execFileSync } from "node:child_process";
import { readdirSync, readFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";
import { afterAll, beforeAll, expect, test } from "vitest";
import { exportLines } from "../../server/export/lines.ts";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { changes, event, makers, modelId, names, reading, stateWith, stream } from "./store-record.ts";

const program = fileURLToPath(new URL("../../dist/server/main.js", import.meta.url));
const plant = makePlant(1);
const everything = { streams: [stream], from: 0, to: Number.MAX_SAFE_INTEGER };

test.each(makers)(
  "$name: results of more than one page come whole, in order of time and sequence, as a table and as JSON",
  ({ place }) => {
    const { writer, reader, remove } = place();
    const store = writer();
    store.addModel({ id: modelId, name: "m", properties: names, text: "{}" });
    const readings = Array.from({ length: 1201 }, (_, i) => reading(1000 * (i >> 1), { sequence: i }));
    store.commit(changes({ readings: [...readings].reverse(), states: stateWith({}) }));
    const record = reader();
    const table = [...exportLines(record, "results", "csv", everything)].map((line) => line.trimEnd().split(","));
    expect(table[0].slice(0, 8)).toEqual([
      "stream",
      "time",
      "sequence",
      "verdict",
      "ethanol",
      "ethanol uncertainty",
      "water",
      "water uncertainty",
    ]);
    expect(table.slice(1).map(([, , sequence]) => Number(sequence))).toEqual(readings.map((_, i) => i));
    expect(table[3].slice(0, 9)).toEqual([
      "s-1",
      "1970-01-01T00:00:01.000Z",
      "2",
      "inside",
      "90.125",
      "0.25",
      "9",
      "",
      "3.5",
    ]);

    // `from` is in it, `to` is not.
    const some = [...exportLines(record, "results", "ndjson", { ...everything, from: 2000, to: 4000 })];
    expect(some.map((line) => JSON.parse(line).sequence)).toEqual([4, 5, 6, 7]);
    expect(JSON.parse(some[0])).toMatchObject({
      stream: "s-1",
      time: "1970-01-01T00:00:02.000Z",
      properties: { ethanol: { value: 90.125, uncertainty: 0.25 } },
      verdict: ["inside"],
    });
    record.close();
    store.close();
    remove();
  },
);

test.each(makers)("$name: spectra of two axes are no table, and it is said what to do", ({ place }) => {
  const { writer, reader, remove } = place();
  const store = writer();
  store.addModel({ id: modelId, name: "m", properties: names, text: "{}" });
  const axis = (start: number) => ({ unit: "nm" as const, start, step: 1, count: 3 });
  const readings = [1000, 1000, 1100].map((start, i) => reading(i, {}, { axis: axis(start) }));
  store.commit(changes({ readings, states: stateWith({}) }));
  const record = reader();
  const lines = exportLines(record, "spectra", "csv", everything);
  expect([lines.next().value, lines.next().value]).toEqual([
    "time,sequence,1000,1001,1002\n",
    "1970-01-01T00:00:00.000Z,1,0.5,0.1,NaN\n",
  ]);
  expect(() => [...lines]).toThrow(
    /s-1, 1970-01-01T00:00:00.002Z: the axis is not that of the first spectrum.*--format ndjson/,
  );
  record.close();
  store.close();
  remove();
});

test.each(makers)("$name: every event comes once, also past a page", ({ place }) => {
  const { writer, reader, remove } = place();
  const store = writer();
  const events = Array.from({ length: 2500 }, (_, i) => event(i + 1, { says: `one, "${i}"` }));
  store.commit(changes({ events }));
  const record = reader();
  const table = [...exportLines(record, "events", "csv", everything)];
  expect(table.length).toBe(2501);
  expect(table[2500]).toBe('2500,1970-01-01T00:41:40.000Z,s-1,alarm raised,,"one, ""2499""",,false\n');
  record.close();
  store.close();
  remove();
});

let chain: Chain;
let time = Date.now() - 60_000;
const first = time + 1000;
beforeAll(async () => {
  chain = await startChain();
  for (let i = 0; i < 20; i++) {
    time += 1000;
    await chain.publish("bq-201", { time, sequence: i, values: Array.from(spectrumAt(plant, "bq-201", time)) });
  }
  await eventually("the last on record", async () => {
    const { judged } = await chain.get<{ judged?: { time: number } }>(`/streams/bq-201/reading?at=${time}`);
    return judged?.time === time;
  });
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

const config = () => join(chain.folder, "plant.json");
const run = (...args: string[]) =>
  execFileSync(process.execPath, [program, ...args], { encoding: "utf8", stdio: "pipe" });

test("the command writes the file whole, beside it a check value that sha256sum accepts, while the service runs", () => {
  const out = join(chain.folder, "results.csv");
  const words = ["export", "--config", config(), "--what", "results", "--stream", "bq-201", "--out", out];
  const printed = JSON.parse(run(...words, "--json"));
  expect(printed).toMatchObject({ file: out, lines: 21 });
  expect(execFileSync("sha256sum", ["--check", "results.csv.sha256"], { cwd: dirname(out), encoding: "utf8" })).toMatch(
    /results\.csv: OK/,
  );
  expect(readFileSync(`${out}.sha256`, "utf8")).toContain(printed.sha256);
  expect(() => run(...words)).toThrow(/results\.csv is there already, expected a new file/);
  expect(readdirSync(chain.folder).filter((file) => file.endsWith(".part"))).toEqual([]);
});

test("spectra that were taken out are what a load takes in: it finds every one of them there", () => {
  const out = join(chain.folder, "spectra.ndjson");
  const from = new Date(first).toISOString();
  const words = ["--what", "spectra", "--format", "ndjson", "--stream", "bq-201", "--from", from, "--out", out];
  run("export", "--config", config(), ...words);
  const lines = readFileSync(out, "utf8").trim().split("\n");
  expect(JSON.parse(lines[0]).values).toEqual(Array.from(spectrumAt(plant, "bq-201", first)));
  const load = run("load", "--stream", "bq-201", "--data", out, "--url", chain.url, "--json");
  expect(JSON.parse(load)).toEqual({ recorded: 0, repeated: 20, refused: 0 });
});
