import { type ChildProcess, spawn } from "node:child_process";
import { createConnection } from "node:net";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { connectAsync, type MqttClient } from "mqtt";
import { afterAll, beforeAll, expect, test } from "vitest";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, eventually, prefix, startChain } from "../chain.ts";

const program = fileURLToPath(new URL("../../dist/server/main.js", import.meta.url));
const plant = makePlant(1);
const secret = "a long enough secret";

let chain: Chain;
beforeAll(async () => {
  chain = await startChain();
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

/** `millrace publisher …`, with a line on its standard input. */
async function publisher(args: readonly string[], input = `${secret}\n`) {
  const child: ChildProcess = spawn(process.execPath, [
    program,
    "publisher",
    ...args,
    "--config",
    join(chain.folder, "plant.json"),
  ]);
  let out = "";
  for (const stream of [child.stdout!, child.stderr!]) stream.on("data", (chunk) => (out += String(chunk)));
  child.stdin!.end(input);
  const code = await new Promise<number | null>((resolve) => child.once("close", resolve));
  return { code, out };
}

const connect = (username?: string, password?: string) =>
  connectAsync(chain.brokerUrl, { reconnectPeriod: 0, ...(username ? { username, password } : {}) }, false);

async function publishReading(client: MqttClient, stream: "bq-201" | "bq-305") {
  const time = Date.now();
  const reading = { time, sequence: time, values: Array.from(spectrumAt(plant, stream, time)) };
  await client.publishAsync(`${prefix}/${stream}/reading`, JSON.stringify(reading), { qos: 1 });
  return time;
}

const closed = (client: MqttClient) => new Promise<void>((resolve) => client.once("close", () => resolve()));
const figure = async (name: string) =>
  Number(
    new RegExp(`^${name.replace(/[{}"]/g, "\\$&")} (\\S+)$`, "m").exec(
      await (await fetch(`${chain.url}/metrics`)).text(),
    )?.[1],
  );

test("nobody may say in the engine's place that an alarm is gone", async () => {
  const client = await connect();
  client.on("error", () => {});
  const cut = closed(client);
  client.publish(`${prefix}/bq-305/alarm`, "{}", { qos: 1 });
  await cut;
  expect(await figure('millrace_broker_turned_away_total{reason="no right to publish"}')).toBe(1);
});

test("a connection that announces a packet of 100 MB is cut off before it comes, and the others go on", async () => {
  const other = await connect();
  const { hostname, port } = new URL(chain.brokerUrl);
  const socket = createConnection({ host: hostname, port: Number(port) });
  const cut = new Promise<void>((resolve) => socket.once("close", () => resolve()));
  socket.on("error", () => {});
  // CONNECT (MQTT 3.1.1 §3.1, client id "big"), then the fixed header of a PUBLISH of 104 857 600 bytes and nothing of it.
  socket.write(Buffer.from([0x10, 15, 0, 4, 0x4d, 0x51, 0x54, 0x54, 4, 2, 0, 60, 0, 3, 0x62, 0x69, 0x67]));
  await new Promise((resolve) => socket.once("data", resolve));
  socket.write(Buffer.from([0x32, 0x80, 0x80, 0x80, 0x32]));
  await cut;
  await publishReading(other, "bq-201");
  expect(await figure('millrace_broker_turned_away_total{reason="packet too large"}')).toBe(1);
  await other.endAsync(true);
});

test("from the first publisher on everybody signs in, publishes only its own streams, and goes when it is removed", async () => {
  expect(await publisher(["add", "analyzer", "--streams", "nowhere"])).toMatchObject({
    code: 1,
    out: expect.stringContaining("--streams names nowhere, expected streams of this plant: bq-201"),
  });
  expect(await publisher(["add", "analyzer", "--streams", "bq-201"], "short\n")).toMatchObject({ code: 1 });

  const early = await connect();
  early.on("error", () => {});
  const cut = closed(early);
  expect(await publisher(["add", "analyzer", "--streams", "bq-201"])).toMatchObject({ code: 0 });
  await cut; // who had come in without a name

  await expect(connect()).rejects.toThrow(/Bad username or password|Not authorized/i);
  await expect(connect("analyzer", "another secret")).rejects.toThrow(/Bad username or password|Not authorized/i);

  const analyzer = await connect("analyzer", secret);
  analyzer.on("error", () => {});
  const time = await publishReading(analyzer, "bq-201");
  await eventually("the reading on record", async () => {
    const { judged } = await chain.get<{ judged: { time: number } }>(`/streams/bq-201/reading?at=${time}`);
    return judged.time === time;
  });
  const refused = closed(analyzer);
  publishReading(analyzer, "bq-305").catch(() => {});
  await refused;

  const again = await connect("analyzer", secret);
  again.on("error", () => {});
  const gone = closed(again);
  expect(await publisher(["remove", "analyzer"])).toMatchObject({ code: 0 });
  await gone;
});
