import { connectAsync } from "mqtt";
import { WebSocket } from "ws";
import type { FromServer } from "../../core/messages/index.ts";
import type { BenchResult } from "./bench-result.ts";
import { type BenchPlant, startBenchPlant } from "./plant.ts";
import { payloads, publishAll } from "./publisher.ts";
import { timeByStage } from "./stages.ts";

const begin = Date.now() - 24 * 3_600_000;
const sustained = 4000;
const inFlight = 100;
const rounds = 3;

/**
 * The whole way, on the real service: a publisher's QoS 1 → scored → committed → pushed to a screen, beside a bare subscriber of the same broker
 * with the same payload and QoS, taken in turn in one run; the delay at a given rate; and the cost of a reading by the number of streams.
 */
export async function benchIngest(): Promise<BenchResult[]> {
  const plant = await startBenchPlant(3);
  const results = [
    ...(await throughput(plant)),
    ...(await delay(plant, 200, 1000)),
    ...(await delay(plant, 2000, 10_000)),
  ];
  await plant.stop();
  return [...results, ...timeByStage(), ...(await byStreams())];
}

/** process time goes on from one measurement to the next */
let time = begin;

async function throughput(plant: BenchPlant): Promise<BenchResult[]> {
  const topics = plant.ids.map((id) => `millrace/bench/${id}/reading`);
  await endToEnd(plant, topics, 1000); // warm
  const ours: number[] = [];
  const bare: number[] = [];
  for (let i = 0; i < rounds; i++) {
    bare.push(await bareSubscriber(plant));
    ours.push(await endToEnd(plant, topics, sustained));
  }
  const [us, them] = [median(ours), median(bare)];
  const commits = (await plant.figure("millrace_commit_seconds_sum")) / (await plant.figure("millrace_readings_total"));
  return [
    { name: "bare subscriber, same broker, payload and QoS", value: them, unit: "/s" },
    { name: "published → scored → committed → pushed", value: us, unit: "/s", note: spread(ours) },
    { name: "  over the bare subscriber", value: us / them, unit: "×", wanted: "at least 0.5", good: us / them >= 0.5 },
    { name: "  commit, of each reading", value: commits * 1e6, unit: "µs" },
  ];
}

/** Messages a second that a mqtt.js subscriber gets, of a topic that is none of the engine's. */
async function bareSubscriber({ brokerUrl }: BenchPlant): Promise<number> {
  const client = await connectAsync(brokerUrl);
  await client.subscribeAsync("bench/bare", { qos: 1 });
  let came = 0;
  const all = new Promise<void>((resolve) => {
    client.on("message", () => {
      if (++came === sustained) resolve();
    });
  });
  const began = performance.now();
  await Promise.all([all, publishAll({ brokerUrl, topics: ["bench/bare"], count: sustained, inFlight, begin })]);
  const seconds = (performance.now() - began) / 1000;
  await client.endAsync();
  return sustained / seconds;
}

/** Readings a second from the publisher to a screen, all of them on record. @throws when one is missing */
async function endToEnd(plant: BenchPlant, topics: string[], count: number): Promise<number> {
  const last = time + count - 1;
  const screen = await openScreen(plant, (at) => at === last);
  const from = time;
  time += count;
  const began = performance.now();
  await Promise.all([screen.done, publishAll({ brokerUrl: plant.brokerUrl, topics, count, inFlight, begin: from })]);
  const seconds = (performance.now() - began) / 1000;
  screen.close();
  if (screen.seen.size + screen.skipped() !== count)
    throw new Error(`${screen.seen.size} pushed and ${screen.skipped()} conflated of ${count}`);
  return count / seconds;
}

/** From the call of publish to the message at a screen, both in this process. */
async function delay(plant: BenchPlant, perSecond: number, count: number): Promise<BenchResult[]> {
  const sentAt = new Map<number, number>();
  const delays: number[] = [];
  const last = time + count - 1;
  const screen = await openScreen(plant, (at) => {
    delays.push(performance.now() - sentAt.get(at)!);
    return at === last;
  });
  const client = await connectAsync(plant.brokerUrl);
  const payload = payloads();
  const began = performance.now();
  let sent = 0;
  let acknowledged = 0;
  const sending = setInterval(() => {
    const due = Math.min(count, Math.floor(((performance.now() - began) * perSecond) / 1000));
    for (; sent < due; sent++) {
      const at = time + sent;
      const bytes = payload(at);
      sentAt.set(at, performance.now());
      const topic = `millrace/bench/${plant.ids[at % plant.ids.length]}/reading`;
      client.publish(topic, bytes, { qos: 1 }, (error) => {
        if (!error) acknowledged++;
      });
    }
  }, 5);
  await screen.done;
  clearInterval(sending);
  const rate = count / ((performance.now() - began) / 1000);
  await client.endAsync();
  screen.close();
  time += count;
  delays.sort((a, b) => a - b);
  const p99 = delays[Math.floor(0.99 * delays.length)];
  const most = perSecond <= 200 ? 150 : 500;
  const lost = acknowledged - screen.seen.size - screen.skipped();
  const note = `${rate.toFixed(0)} readings/s over ${(count / rate).toFixed(0)} s, ${lost} lost, ${screen.skipped()} conflated`;
  return [
    { name: `publish to screen at ${perSecond}/s, p50`, value: median(delays), unit: "ms", note },
    {
      name: `publish to screen at ${perSecond}/s, p99`,
      value: p99,
      unit: "ms",
      wanted: `< ${most}, none lost`,
      good: p99 < most && lost === 0,
    },
  ];
}

/** A screen that hears of every reading until `isLast`. */
async function openScreen({ url, ids }: BenchPlant, isLast: (time: number) => boolean) {
  const seen = new Set<number>();
  let skipped = 0;
  const socket = new WebSocket(`${url.replace("http", "ws")}/live`);
  let finish: () => void;
  const done = new Promise<void>((resolve) => {
    finish = resolve;
  });
  await new Promise<void>((resolve, reject) => {
    socket.once("error", reject);
    socket.on("message", (data) => {
      const message = JSON.parse(String(data)) as FromServer;
      if (message.type === "hello") socket.send(JSON.stringify({ type: "subscribe", streams: ids }));
      if (message.type === "snapshot") resolve();
      if (message.type !== "batch") return;
      skipped += message.skipped;
      for (const { time: at } of message.readings) {
        seen.add(at);
        if (isLast(at)) finish();
      }
    });
  });
  return { seen, done, skipped: () => skipped, close: () => socket.close() };
}

/** The same number of readings over 1, 10, 100 and 1 000 streams, each plant in turn. */
export async function byStreams(): Promise<BenchResult[]> {
  const counts = [1, 10, 100, 1000];
  const costs: number[] = [];
  for (const streams of counts) {
    const plant = await startBenchPlant(streams);
    const topics = plant.ids.map((id) => `millrace/bench/${id}/reading`);
    await endToEnd(plant, topics, 2000);
    const rates: number[] = [];
    for (let i = 0; i < rounds; i++) rates.push(await endToEnd(plant, topics, 3000));
    costs.push(1e6 / Math.max(...rates));
    await plant.stop();
  }
  const [least, largest] = [Math.min(...costs), Math.max(...costs)];
  return [
    ...counts.map(
      (streams, i): BenchResult => ({ name: `a reading with ${streams} streams`, value: costs[i], unit: "µs" }),
    ),
    {
      name: "  the dearest over the cheapest",
      value: largest / least,
      unit: "×",
      wanted: "at most 1.2",
      good: largest / least <= 1.2,
    },
  ];
}

function median(values: readonly number[]): number {
  return values.toSorted((a, b) => a - b)[Math.floor(values.length / 2)];
}

function spread(values: readonly number[]): string {
  return `${Math.min(...values).toFixed(0)}–${Math.max(...values).toFixed(0)} in ${values.length} rounds`;
}
