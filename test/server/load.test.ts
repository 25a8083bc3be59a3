import { execFile } from "node:child_process";
import { writeFileSync } from "node:fs";
import { join } from "node:path";
import { promisify } from "node:util";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { RecordedEvent } from "../../core/messages/index.ts";
import { makePlant, spectrumAt, wavelengths } from "../../simulator/plant/index.ts";
import { type Chain, startChain } from "../chain.ts";
import { program } from "../program.ts";

const run = promisify(execFile);
const plant = makePlant(1);
let chain: Chain;
const end = Math.floor(Date.now() / 1000) * 1000 - 3_600_000;
const period = 10_000;

beforeAll(async () => {
  chain = await startChain();
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

/** `count` recorded readings that end at `end`; those in `odd` carry a band that the model never saw. */
function history(count: number, odd: (i: number) => boolean = () => false) {
  return Array.from({ length: count }, (_, i) => {
    const time = end - (count - i) * period;
    const values = Array.from(
      spectrumAt(plant, "bq-201", time),
      (value, j) => value + (odd(i) && j > 200 && j < 230 ? 0.1 : 0),
    );
    return { time, sequence: i, values };
  });
}
function file(name: string, text: string): string {
  const path = join(chain.folder, name);
  writeFileSync(path, text);
  return path;
}
async function load(path: string, ...more: string[]) {
  const { stdout } = await run(process.execPath, [
    program,
    "load",
    "--stream",
    "bq-201",
    "--data",
    path,
    "--url",
    chain.url,
    "--json",
    ...more,
  ]);
  return JSON.parse(stdout);
}
async function failure(path: string, ...more: string[]): Promise<{ code: number; stderr: string }> {
  return load(path, ...more).then(
    () => ({ code: 0, stderr: "" }),
    (error) => error,
  );
}

test("recorded readings go through the same judging: verdicts, alarms and excursions come of them, and nothing is left open", async () => {
  const readings = history(300, (i) => i >= 100 && i < 120);
  const path = file("history.ndjson", readings.map((reading) => JSON.stringify(reading)).join("\n"));
  expect(await load(path)).toEqual({ recorded: 300, repeated: 0, refused: 0 });
  const trend = await chain.get<{ time: number[]; verdict: number[] }>(
    `/streams/bq-201/trend?from=${readings[0].time}&to=${end}&points=1000`,
  );
  expect(trend.time).toEqual(readings.map(({ time }) => time));
  expect(trend.verdict.map((mask) => (mask & 8) > 0)).toEqual(readings.map((_, i) => i >= 100 && i < 120));
  const { excursions } = await chain.get<{ excursions: { kind: string; start: number; end: number }[] }>("/excursions");
  expect(excursions.find(({ kind }) => kind === "unfamiliar")).toMatchObject({
    start: readings[100].time,
    end: readings[119].time,
    ended: "returned",
  });
  const { events } = await chain.get<{ events: RecordedEvent[] }>("/events?stream=bq-201");
  const raised = events.filter(({ kind, alarm }) => kind === "alarm raised" && alarm?.key === "unfamiliar");
  expect(raised).toHaveLength(1);
  expect(raised[0]).toMatchObject({ at: readings[102].time, history: true }); // the third in a row
  // Nothing live comes in this test, and on a slow machine that has been noticed by now.
  const { alarms } = await chain.get<{ alarms: { key: string }[] }>("/alarms");
  expect(alarms.filter(({ key }) => key !== "silent")).toEqual([]);
});

test("the same file again changes nothing", async () => {
  const path = join(chain.folder, "history.ndjson");
  expect(await load(path)).toEqual({ recorded: 0, repeated: 300, refused: 0 });
});

test("a table with a time column comes in as well, its other columns as context", async () => {
  const readings = history(320).slice(0, 20);
  const head = ["time", "sequence", "temperature", ...Array.from(wavelengths)].join(",");
  const rows = readings.map(({ time, sequence, values }) =>
    [new Date(time).toISOString(), sequence, 38.5, ...values].join(","),
  );
  const path = file("history.csv", [head, ...rows, ""].join("\n"));
  expect(await load(path)).toEqual({ recorded: 20, repeated: 0, refused: 0 });
});

test("a bad line is named, what came before it is on record, and the mended file goes on from there", async () => {
  const readings = history(340).slice(0, 20);
  const lines = readings.map((reading) => JSON.stringify(reading));
  const broken = file("broken.ndjson", lines.with(7, '{"time":').join("\n"));
  const { code, stderr } = await failure(broken);
  expect(code).toBe(1);
  expect(stderr).toMatch(/line 8 is no JSON .*expected one reading a line/);
  const mended = file("mended.ndjson", lines.join("\n"));
  const { recorded, repeated } = await load(mended);
  expect(recorded + repeated).toBe(20);
});

test.each<[string, (folder: string) => string[], number, RegExp]>([
  ["a file that is not there", (folder) => [join(folder, "none.csv")], 1, /none\.csv is not readable \(ENOENT\)/],
  [
    "another kind of file",
    (folder) => [join(folder, "plant.json")],
    1,
    /expected a name that ends in \.csv, \.ndjson, \.cbor/,
  ],
  [
    "a service that does not run",
    (folder) => [join(folder, "history.ndjson"), "--url", "http://127.0.0.1:9"],
    1,
    /Start the service first/,
  ],
  ["an unknown option", (folder) => [join(folder, "history.ndjson"), "--fast"], 2, /unknown option '--fast'/],
])("%s is said", async (_, args, code, expected) => {
  const outcome = await failure(...(args(chain.folder) as [string, ...string[]]));
  expect(outcome.code).toBe(code);
  expect(outcome.stderr).toMatch(expected);
});
