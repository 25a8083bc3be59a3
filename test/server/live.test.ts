import { connect } from "node:net";
import { afterAll, beforeAll, expect, test } from "vitest";
import { WebSocket } from "ws";
import { beatEveryMs, checker, type FromServer, FromServerSchema, type Judged } from "../../core/messages/index.ts";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";

const plant = makePlant(1);
const fromServer = checker(FromServerSchema);
let chain: Chain;
let time = Date.now() - 60_000;

beforeAll(async () => {
  chain = await startChain();
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

async function publish(add = 0): Promise<number> {
  time += 100;
  const values = Array.from(spectrumAt(plant, "bq-305", time), (value, j) => value + (j > 200 && j < 230 ? add : 0));
  await chain.publish("bq-305", { time, sequence: time, values });
  return time;
}

/** A screen's side of the link: everything it was sent, each message checked against the published schema. */
async function open(headers: Record<string, string> = {}) {
  const socket = new WebSocket(`${chain.url.replace("http", "ws")}/live`, { headers });
  const heard: FromServer[] = [];
  const misfits: unknown[] = [];
  socket.on("message", (data) => {
    const message = JSON.parse(String(data)) as FromServer;
    const wrong = fromServer.mismatch(message);
    if (wrong) misfits.push(wrong);
    heard.push(message);
  });
  await new Promise<void>((resolve, reject) => {
    socket.once("open", resolve);
    socket.once("error", reject);
  });
  const of = <Type extends FromServer["type"]>(type: Type) =>
    heard.filter((message): message is Extract<FromServer, { type: Type }> => message.type === type);
  return {
    socket,
    of,
    misfits,
    send: (message: unknown) => socket.send(typeof message === "string" ? message : JSON.stringify(message)),
    readings: (): Judged[] => of("batch").flatMap(({ readings }) => readings),
  };
}

test("hello, snapshot, then every judged reading, and a beat every second", async () => {
  const first = await publish();
  const link = await open();
  await eventually("hello", () => link.of("hello")[0]);
  link.send({ type: "subscribe", streams: ["bq-305"] });
  const snapshot = await eventually("the snapshot", () => link.of("snapshot")[0]);
  await eventually("the reading before it", async () => {
    const [now] = snapshot.streams;
    return now.latest?.time === first || link.readings().some((reading) => reading.time === first);
  });
  const times = [await publish(), await publish(), await publish()];
  await eventually(
    "three readings",
    () => link.readings().filter((reading) => times.includes(reading.time)).length === 3,
  );
  expect(link.readings().map((reading) => reading.time)).toEqual(
    link
      .readings()
      .map((reading) => reading.time)
      .sort(),
  );
  await eventually("two beats", () => link.of("beat").length >= 2, 3 * beatEveryMs);
  expect(link.of("beat").at(-1)!.engine).toMatchObject({ running: true, source: true });
  expect(link.misfits).toEqual([]);
  link.socket.close();
});

test("a client hears of the streams that it asked for only", async () => {
  const link = await open();
  link.send({ type: "subscribe", streams: ["bq-201"] });
  await eventually("the snapshot", () => link.of("snapshot")[0]);
  await publish();
  await eventually("two beats", () => link.of("beat").length >= 2, 5000);
  expect(link.readings()).toEqual([]);
  link.socket.close();
});

test("after a break the events since the cursor are sent again, none twice, none missing", async () => {
  const before = await open();
  before.send({ type: "subscribe", streams: ["bq-305"] });
  const { cursor } = await eventually("the snapshot", () => before.of("snapshot")[0]);
  before.socket.terminate();
  for (let i = 0; i < 3; i++) await publish(0.1);
  await eventually("the alarm", async () => (await chain.get<{ alarms: unknown[] }>("/alarms")).alarms.length === 1);

  const after = await open();
  after.send({ type: "subscribe", streams: ["bq-305"], since: cursor });
  const snapshot = await eventually("the snapshot", () => after.of("snapshot")[0]);
  const kinds = snapshot.events.map(({ kind }) => kind);
  expect(kinds.filter((kind) => kind === "alarm raised")).toHaveLength(1);
  const cursors = snapshot.events.map((event) => event.cursor);
  expect(cursors).toEqual([...new Set(cursors)].sort((a, b) => a - b));
  expect(cursors[0]).toBeGreaterThan(cursor);
  expect(snapshot.streams[0].alarms).toHaveLength(1);
  after.socket.close();
});

test.each<[string, unknown, RegExp]>([
  ["text that is no JSON", "hello", /no JSON/],
  ["another message", { type: "unsubscribe" }, /expected/],
  [
    "an unknown stream",
    { type: "subscribe", streams: ["bq-9"] },
    /bq-9 is no stream of this plant; it has bq-201, bq-305, bq-410/,
  ],
  ["a cursor below zero", { type: "subscribe", streams: [], since: -1 }, /since is -1/],
])("%s is refused in words, and the link lives on", async (_, message, expected) => {
  const link = await open();
  link.send(message);
  const { says } = await eventually("the refusal", () => link.of("refused")[0]);
  expect(says).toMatch(expected);
  link.send({ type: "subscribe", streams: ["bq-201"] });
  await eventually("the snapshot", () => link.of("snapshot")[0]);
  link.socket.close();
});

test("a page from elsewhere gets no link", async () => {
  await expect(open({ origin: "http://elsewhere.example" })).rejects.toThrow("403");
});

test("a client that never answers the farewell does not hold up the stop", async () => {
  const other = await startChain();
  const { hostname, port } = new URL(other.url);
  const raw = connect(Number(port), hostname);
  raw.write(
    `GET /live HTTP/1.1\r\nHost: ${hostname}:${port}\r\nUpgrade: websocket\r\nConnection: Upgrade\r\nSec-WebSocket-Version: 13\r\nSec-WebSocket-Key: ${Buffer.alloc(16, 7).toString("base64")}\r\n\r\n`,
  );
  await new Promise((resolve) => raw.once("data", resolve));
  raw.pause(); // reads nothing any more, and never closes
  const stopped = await Promise.race([
    other.stop(),
    new Promise((resolve) => setTimeout(resolve, 15_000, "still running")),
  ]);
  expect(stopped).toBe(0);
  raw.destroy();
  other.remove();
});
