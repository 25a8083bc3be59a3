import { connect, type Socket } from "node:net";
import { afterAll, beforeAll, expect, test } from "vitest";
import { WebSocket } from "ws";
import type { FromServer } from "../../core/messages/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { everyOneRecorded, figure, residentMegabytes, startLoad } from "./load.ts";

const streams = ["bq-201", "bq-305", "bq-410"];
const crowd = process.env.MILLRACE_FULL === "1" ? 200 : 60;

let chain: Chain;
beforeAll(async () => {
  chain = await startChain();
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

/** A screen that listens: what it was told last of each stream, and every event. */
async function screen(url: string) {
  const socket = new WebSocket(`${url.replace("http", "ws")}/live`);
  const latest = new Map<string, number>();
  const cursors: number[] = [];
  socket.on("message", (data) => {
    const message = JSON.parse(String(data)) as FromServer;
    if (message.type === "hello") socket.send(JSON.stringify({ type: "subscribe", streams }));
    if (message.type !== "batch") return;
    for (const { stream, latest: reading } of message.now) if (reading) latest.set(stream, reading.time);
    for (const { cursor } of message.events) cursors.push(cursor);
  });
  await new Promise((resolve, reject) => socket.once("open", resolve).once("error", reject));
  return { latest, cursors, close: () => socket.close() };
}

/** Opens a live link by hand and never reads from it (RFC 6455 §4.1, §5.2). */
async function deafScreen(url: string): Promise<Socket> {
  const { hostname, port } = new URL(url);
  const socket = connect(Number(port), hostname);
  socket.on("error", () => {});
  await new Promise((resolve) => socket.once("connect", resolve));
  const key = Buffer.alloc(16, 7).toString("base64");
  socket.write(
    `GET /live HTTP/1.1\r\nHost: ${hostname}:${port}\r\nUpgrade: websocket\r\nConnection: Upgrade\r\nSec-WebSocket-Key: ${key}\r\nSec-WebSocket-Version: 13\r\n\r\n`,
  );
  await new Promise((resolve) => socket.once("data", resolve));
  socket.pause();
  const text = Buffer.from(JSON.stringify({ type: "subscribe", streams }));
  // A text frame, masked with zeros, so the text stands as it is.
  socket.write(Buffer.concat([Buffer.from([0x81, 0x80 | text.length, 0, 0, 0, 0]), text]));
  return socket;
}

test("a screen that reads nothing holds up neither the record nor the other screens, and costs bounded memory", async () => {
  const other = await screen(chain.url);
  const deaf = await Promise.all(Array.from({ length: 10 }, () => deafScreen(chain.url)));
  const before = await residentMegabytes(chain.url);
  const load = await startLoad(chain.brokerUrl, Date.now() - 3_600_000, { perSecond: 400, inFlight: 100 });
  await eventually("readings", () => load.acknowledged.length > 3000, 60_000);
  await load.stop();
  await everyOneRecorded(chain.url, load.acknowledged);
  const last = Math.max(...load.acknowledged.map(({ time }) => time));
  await eventually("the other screen up to date", () => Math.max(...other.latest.values()) === last);
  const after = await residentMegabytes(chain.url);
  console.log(
    `10 screens that read nothing, ${load.acknowledged.length} readings: ${before.toFixed(0)} to ${after.toFixed(0)} MB`,
  );
  expect(after - before).toBeLessThan(200);
  for (const socket of deaf) socket.destroy();
  other.close();
});

test(`${crowd} screens at once each see the newest reading of every stream`, async () => {
  const screens = await Promise.all(Array.from({ length: crowd }, () => screen(chain.url)));
  await eventually("all of them counted", async () => (await figure(chain.url, "millrace_live_clients")) >= crowd);
  const load = await startLoad(chain.brokerUrl, Date.now() - 1_800_000, { perSecond: 60 });
  await eventually("readings", () => load.acknowledged.length > 300, 60_000);
  await load.stop();
  await everyOneRecorded(chain.url, load.acknowledged);
  const newest = streams.map((stream) =>
    Math.max(...load.acknowledged.filter((sent) => sent.stream === stream).map(({ time }) => time)),
  );
  await eventually(
    "every screen up to date",
    () => screens.every(({ latest }) => streams.every((stream, i) => latest.get(stream) === newest[i])),
    30_000,
  );
  // The same events, each once and in their order, on every screen.
  for (const { cursors } of screens) expect(cursors).toEqual(screens[0].cursors);
  for (const { close } of screens) close();
  await eventually("all of them gone", async () => (await figure(chain.url, "millrace_live_clients")) === 0);
});
