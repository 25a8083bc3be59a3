import { connectAsync, type MqttClient } from "mqtt";
import { expect } from "vitest";
import { makePlant, type PlantStreamId, spectrumAt, streamIds } from "../../simulator/plant/index.ts";
import { eventually, prefix } from "../chain.ts";

const plant = makePlant(1);

export interface Sent {
  stream: PlantStreamId;
  /** epoch ms; also its sequence number */
  time: number;
}

/** A publisher that goes on through every break, like an analyzer's gateway with a memory of its own. */
export interface Load {
  /** those whose PUBACK came */
  acknowledged: Sent[];
  /** sends no more; resolves when every reading that was sent has its PUBACK */
  stop: () => Promise<void>;
}

/** Publishes to all streams, a reading a millisecond of process time from `begin` on, at most `inFlight` without PUBACK and about `perSecond`. */
export async function startLoad(
  brokerUrl: string,
  begin: number,
  {
    inFlight = 20,
    perSecond = 100,
    streams = streamIds,
  }: { inFlight?: number; perSecond?: number; streams?: readonly PlantStreamId[] } = {},
): Promise<Load> {
  const client: MqttClient = await connectAsync(brokerUrl, { reconnectPeriod: 500 });
  client.on("error", () => {});
  const acknowledged: Sent[] = [];
  let under = 0;
  let time = begin;
  const sending = setInterval(() => {
    const share = perSecond / 20;
    for (let i = 0; i < share && under < inFlight; i++) {
      const sent = { stream: streams[time % streams.length], time };
      under++;
      client.publish(`${prefix}/${sent.stream}/reading`, readingText(sent), { qos: 1 }, (error) => {
        under--;
        if (!error) acknowledged.push(sent);
      });
      time++;
    }
  }, 50);
  return {
    acknowledged,
    async stop() {
      clearInterval(sending);
      await eventually("every reading that was sent acknowledged", () => under === 0, 60_000);
      await client.endAsync();
    },
  };
}

export function readingText({ stream, time }: Sent): string {
  return JSON.stringify({ time, sequence: time, values: Array.from(spectrumAt(plant, stream, time)) });
}

/** The times of a stream's recorded readings. */
export async function recordedTimes(url: string, stream: string, from: number, to: number): Promise<Set<number>> {
  const times = new Set<number>();
  // In portions: a trend gives each reading by itself only while there are no more of them than points.
  for (let at = from; at < to; at += 4000) {
    const range = `from=${at}&to=${Math.min(to, at + 4000)}&points=5000`;
    const answer = await fetch(`${url}/api/v1/streams/${stream}/trend?${range}`);
    const trend = (await answer.json()) as { whole: boolean; time: number[] };
    expect(trend.whole).toBe(true);
    for (const time of trend.time) times.add(time);
  }
  return times;
}

/** Waits until every one of these readings is on record, and fails with those that are not. */
export async function everyOneRecorded(url: string, sent: readonly Sent[], withinMs = 60_000): Promise<void> {
  expect(sent.length).toBeGreaterThan(0);
  const times = sent.map(({ time }) => time);
  const [from, to] = [Math.min(...times), Math.max(...times) + 1];
  const missing = async () => {
    const recorded = new Map<string, Set<number>>();
    for (const stream of streamIds) recorded.set(stream, await recordedTimes(url, stream, from, to));
    return sent.filter(({ stream, time }) => !recorded.get(stream)!.has(time));
  };
  await eventually(
    "every acknowledged reading on record",
    async () => {
      const left = await missing();
      return left.length === 0 ? true : undefined;
    },
    withinMs,
  );
}

/** One figure of /metrics; NaN when it is not there. */
export async function figure(url: string, name: string): Promise<number> {
  const text = await (await fetch(`${url}/metrics`)).text();
  const line = text.split("\n").find((candidate) => candidate.startsWith(`${name} `));
  return Number(line?.slice(name.length + 1));
}

/** Memory of the service's process that is in use, MB. */
export async function residentMegabytes(url: string): Promise<number> {
  return (await figure(url, "process_resident_memory_bytes")) / 1e6;
}
