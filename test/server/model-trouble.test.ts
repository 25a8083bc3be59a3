import { readFileSync, rmSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Judged, Plant, ReadingView } from "../../core/messages/index.ts";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";

let chain: Chain;
beforeAll(async () => {
  chain = await startChain();
});
afterAll(() => chain.remove());

const file = () => join(chain.folder, "bq-305.model.json");

/** Starts the service with another text in the model file of bq-305; returns what the plant says of that stream, and of a healthy one. */
async function startedWith(text: string): Promise<{ trouble?: string; others: (string | undefined)[] }> {
  await chain.stop();
  writeFileSync(file(), text);
  chain = await chain.again();
  const { streams } = await eventually("the plant", async () => {
    const plant = await chain.get<Plant>("/plant");
    return plant.streams.some(({ trouble }) => trouble !== undefined) ? plant : undefined;
  });
  const others = streams.filter(({ id }) => id !== "bq-305").map(({ trouble }) => trouble);
  return { trouble: streams.find(({ id }) => id === "bq-305")!.trouble, others };
}

test("a damaged model, or one for another axis, is refused at the start by file and field; the other streams run on", async () => {
  const good = readFileSync(file(), "utf8");
  const model = JSON.parse(good);
  const cases: [string, string, RegExp][] = [
    ["half a file", good.slice(0, good.length / 2), /bq-305\.model\.json: the file is no JSON/],
    [
      "a short loading",
      JSON.stringify({ ...model, loadings: model.loadings.with(1, model.loadings[1].slice(1)) }),
      /bq-305\.model\.json: loadings\[1\] is 300 values, expected 301/,
    ],
    [
      "another axis",
      JSON.stringify({ ...model, axis: { unit: "nm", start: 900, step: 4, count: 301 } }),
      /bq-305\.model\.json: axis is .*900.*, expected one that the analyzer of bq-305 covers \(.*1000.*2200 nm/,
    ],
  ];
  for (const [name, text, expected] of cases) {
    const { trouble, others } = await startedWith(text);
    expect(trouble, name).toMatch(expected);
    expect(others).toEqual([undefined, undefined]);
  }

  // The model that was in charge goes on, from the record.
  const time = Date.now() - 1000;
  const judged = await judgedAt(time);
  expect(judged.verdict).toEqual(["inside"]);
  expect(judged.properties.water.value).toBeGreaterThan(0);
  expect(await chain.stop()).toBe(0);
});

test("a stream that never had a usable model keeps its readings as unusable, with that reason", async () => {
  const fresh = await startChain();
  await fresh.stop();
  for (const name of ["record.db", "record.db-wal", "record.db-shm"]) rmSync(join(fresh.folder, name), { force: true });
  writeFileSync(join(fresh.folder, "bq-305.model.json"), "{}");
  chain.remove();
  chain = await fresh.again();
  const judged = await judgedAt(Date.now() - 1000);
  expect(judged.verdict).toEqual(["unusable"]);
  expect(judged.unusable).toContain("bq-305.model.json: format is missing");
  const plant = await chain.get<Plant>("/plant");
  expect(plant.streams.find(({ id }) => id === "bq-305")).toMatchObject({ model: null, properties: [] });
  await chain.stop();
});

async function judgedAt(time: number): Promise<Judged> {
  await chain.publish("bq-305", { time, sequence: 1, values: Array.from(spectrumAt(makePlant(1), "bq-305", time)) });
  return eventually("the reading", async () => {
    const view = await chain.get<ReadingView>(`/streams/bq-305/reading?at=${time}`).catch(() => undefined);
    return view?.judged.time === time ? view.judged : undefined;
  });
}
