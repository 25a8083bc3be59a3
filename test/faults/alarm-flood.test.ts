import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { connectAsync } from "mqtt";
import { expect, test } from "vitest";
import { WebSocket } from "ws";
import type { FromServer, OpenAlarm } from "../../core/messages/index.ts";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { eventually, prefix, startChain } from "../chain.ts";
import { figure, residentMegabytes } from "./load.ts";

const plant = makePlant(1);
const streamCount = process.env.MILLRACE_FULL === "1" ? 500 : 50;
const alarmsEach = 20;
const expected = streamCount * alarmsEach;

/** A plant of many streams with one model, whose every alarm is raised by any sound reading. */
function makeFlood(folder: string): string[] {
  const ids = Array.from({ length: streamCount }, (_, i) => `line-${i}`);
  const rules = JSON.parse(readFileSync(join(folder, "bq-305.alarms.json"), "utf8"));
  const property = rules.alarms.find(({ watches }: { watches: { kind: string } }) => watches.kind === "property");
  rules.alarms = Array.from({ length: alarmsEach }, (_, i) => ({
    ...property,
    key: `flood-${i}`,
    title: `Flood ${i}`,
    watches: { ...property.watches, side: "high", limit: -1000 },
  }));
  writeFileSync(join(folder, "flood.alarms.json"), JSON.stringify(rules));
  const config = join(folder, "plant.json");
  const settings = JSON.parse(readFileSync(config, "utf8"));
  const model = settings.streams.find(({ id }: { id: string }) => id === "bq-305");
  settings.streams = ids.map((id) => ({ ...model, id, name: id, alarms: "flood.alarms.json", periodMs: 3_600_000 }));
  writeFileSync(config, JSON.stringify(settings));
  return ids;
}

test(`${expected} alarms at once are all on record, on every screen and published, each once, and the service stays of use`, async () => {
  const made = await startChain();
  await made.stop();
  const ids = makeFlood(made.folder);
  const chain = await startChain({ folder: made.folder });
  const before = await residentMegabytes(chain.url);

  const shown: number[] = [];
  const socket = new WebSocket(`${chain.url.replace("http", "ws")}/live`);
  socket.on("message", (data) => {
    const message = JSON.parse(String(data)) as FromServer;
    if (message.type === "hello") socket.send(JSON.stringify({ type: "subscribe", streams: ids }));
    if (message.type === "batch") {
      for (const { kind, cursor } of message.events) if (kind === "alarm raised") shown.push(cursor);
    }
  });
  const heard = new Set<number>();
  const client = await connectAsync(chain.brokerUrl);
  client.on("message", (_topic, payload) => {
    const { kind, cursor } = JSON.parse(String(payload)) as { kind: string; cursor: number };
    if (kind === "alarm raised") heard.add(cursor);
  });
  await client.subscribeAsync(`${prefix}/+/alarm`, { qos: 1 });

  const time = Date.now() - 60_000;
  for (let i = 0; i < 3; i++) {
    const at = time + 1000 * i;
    const reading = JSON.stringify({ time: at, sequence: i, values: Array.from(spectrumAt(plant, "bq-305", at)) });
    await Promise.all(ids.map((id) => client.publishAsync(`${prefix}/${id}/reading`, reading, { qos: 1 })));
  }
  const raised = () => figure(chain.url, 'millrace_events_total{kind="alarm raised"}');
  await eventually("all of them on record", async () => (await raised()) === expected, 120_000);
  await eventually("all of them on the screen", () => shown.length === expected, 30_000);
  await eventually("all of them published", () => heard.size === expected, 60_000);
  expect(new Set(shown).size).toBe(expected);
  const began = performance.now();
  const { alarms } = await chain.get<{ alarms: OpenAlarm[] }>("/alarms");
  const tookMs = performance.now() - began;
  expect(alarms.length).toBe(expected);
  const after = await residentMegabytes(chain.url);
  console.log(
    `${expected} alarms: answered in ${tookMs.toFixed(0)} ms, ${before.toFixed(0)} to ${after.toFixed(0)} MB`,
  );
  expect(tookMs).toBeLessThan(2000);
  expect(after - before).toBeLessThan(400);

  socket.close();
  await client.endAsync();
  expect(await chain.stop()).toBe(0);
  made.remove();
}, 300_000);
