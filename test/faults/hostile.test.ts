import { connect } from "node:net";
import { connectAsync } from "mqtt";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Refusals } from "../../core/messages/index.ts";
import { type Chain, eventually, prefix, startChain } from "../chain.ts";
import { everyOneRecorded, figure, type Load, residentMegabytes, startLoad } from "./load.ts";

const unknownStreams = process.env.MILLRACE_FULL === "1" ? 100_000 : 5000;
const mostGrowthMegabytes = 300;

let chain: Chain;
let load: Load;
let before: number;
beforeAll(async () => {
  chain = await startChain();
  before = await residentMegabytes(chain.url);
  load = await startLoad(chain.brokerUrl, Date.now() - 3_600_000, { perSecond: 60, streams: ["bq-201"] });
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

const refused = async () =>
  (await chain.get<Refusals>("/refusals?limit=5")).totals.reduce((sum, { count }) => sum + count, 0);

test(`readings of ${unknownStreams} streams that do not exist are counted, and kept only in part`, async () => {
  const hostile = await connectAsync(chain.brokerUrl, { reconnectPeriod: 0 });
  const begun = await refused();
  for (let i = 0; i < unknownStreams; i += 50) {
    const some = Array.from({ length: 50 }, (_, j) =>
      hostile.publishAsync(`${prefix}/nobody-${i + j}/reading`, `{"time":${i}}`, { qos: 1 }),
    );
    await Promise.all(some);
  }
  await eventually("all of them refused", async () => (await refused()) - begun === unknownStreams, 60_000);
  const text = await (await fetch(`${chain.url}/metrics`)).text();
  expect(text.split("\n").filter((line) => line.startsWith("millrace_refusals_total{")).length).toBeLessThan(20);
  await hostile.endAsync(true);
}, 600_000);

test("odd topics are refused or cut off, and never taken for one of ours", async () => {
  const odd = [
    "\u202Ereading",
    "../../etc/reading",
    "bq-201/../bq-305/reading",
    "'; DROP TABLE reading; --/reading",
    "\ud83d\ude00/reading",
    "BQ-201/reading",
    " /reading",
    "/reading",
    `${"x".repeat(60_000)}/reading`,
    `${"a/".repeat(90)}reading`,
    `${"a/".repeat(200)}reading`,
    "__proto__/reading",
    "constructor/state",
  ];
  for (const topic of odd) {
    const hostile = await connectAsync(chain.brokerUrl, { reconnectPeriod: 0 });
    hostile.on("error", () => {});
    const closed = new Promise((resolve) => hostile.once("close", () => resolve(undefined)));
    // As retained messages, too: they would stand in the broker for ever.
    const sent = hostile.publishAsync(`${prefix}/${topic}`, "{}", { qos: 1, retain: true }).catch(() => {});
    await Promise.race([closed, sent]);
    hostile.end(true);
  }
  expect((await fetch(`${chain.url}/readyz`)).status).toBe(200);
});

test("a packet of 100 MB is cut off before it has come, however often it is tried", async () => {
  const { hostname, port } = new URL(chain.brokerUrl);
  const connection = Buffer.from([0x10, 15, 0, 4, 0x4d, 0x51, 0x54, 0x54, 4, 2, 0, 60, 0, 3, 0x62, 0x69, 0x67]);
  // A PUBLISH whose remaining length is 104 857 600 (MQTT 3.1.1 §2.2.3).
  const header = Buffer.from([0x32, 0x80, 0x80, 0x80, 0x32]);
  for (let i = 0; i < 20; i++) {
    const socket = connect(Number(port), hostname);
    socket.on("error", () => {});
    const closed = new Promise((resolve) => socket.once("close", resolve));
    socket.write(connection);
    await new Promise((resolve) => socket.once("data", resolve));
    socket.write(header);
    const block = Buffer.alloc(1024 * 1024);
    let open = true;
    socket.once("close", () => {
      open = false;
    });
    for (let sent = 0; sent < 100 && open; sent++) {
      await new Promise((resolve) => socket.write(block, resolve));
    }
    await closed;
  }
  expect(await figure(chain.url, 'millrace_broker_turned_away_total{reason="packet too large"}')).toBe(20);
});

test("a subscriber of everything that takes nothing is cut off, and holds up nobody", async () => {
  const { hostname, port } = new URL(chain.brokerUrl);
  const socket = connect(Number(port), hostname);
  socket.on("error", () => {});
  const closed = new Promise((resolve) => socket.once("close", resolve));
  socket.write(Buffer.from([0x10, 15, 0, 4, 0x4d, 0x51, 0x54, 0x54, 4, 2, 0, 0, 0, 3, 0x62, 0x69, 0x68]));
  await new Promise((resolve) => socket.once("data", resolve));
  socket.pause();
  // SUBSCRIBE to # at QoS 1 (MQTT 3.1.1 §3.8).
  socket.write(Buffer.from([0x82, 6, 0, 1, 0, 1, 0x23, 1]));
  const busy = await startLoad(chain.brokerUrl, Date.now() - 3_600_000, {
    perSecond: 500,
    inFlight: 100,
    streams: ["bq-305", "bq-410"],
  });
  const begun = busy.acknowledged.length;
  await eventually("a load on the line", () => busy.acknowledged.length > begun + 3000, 60_000);
  await busy.stop();
  await everyOneRecorded(chain.url, busy.acknowledged);
  socket.resume();
  socket.end();
  await closed;
}, 180_000);

test("meanwhile nothing of the others was lost, and the memory stayed bounded", async () => {
  await load.stop();
  await everyOneRecorded(chain.url, load.acknowledged);
  const after = await residentMegabytes(chain.url);
  console.log(
    `hostile publisher: ${before.toFixed(0)} to ${after.toFixed(0)} MB; ${load.acknowledged.length} others' readings on record`,
  );
  expect(after - before).toBeLessThan(mostGrowthMegabytes);
});
