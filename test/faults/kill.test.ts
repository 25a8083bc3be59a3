import { connectAsync } from "mqtt";
import { expect, test } from "vitest";
import { makePlant, type PlantStreamId, spectrumAt, streamIds } from "../../simulator/plant/index.ts";
import { type Chain, eventually, prefix, startChain } from "../chain.ts";
import { recordedTimes } from "./load.ts";

const plant = makePlant(1);
const kills = process.env.MILLRACE_FULL === "1" ? 25 : 5;

/** Publishes to all streams as fast as the broker acknowledges, with up to 50 in flight, until the link breaks; returns what was acknowledged. */
async function publishUntilBroken(chain: Chain, start: number, enough: (acknowledged: number) => Promise<void> | void) {
  const client = await connectAsync(chain.brokerUrl, { reconnectPeriod: 0 });
  client.on("error", () => {});
  const acknowledged: { stream: PlantStreamId; time: number }[] = [];
  let broken = false;
  client.on("close", () => {
    broken = true;
  });
  let time = start;
  let inFlight = 0;
  let wake: () => void = () => {};
  while (!broken) {
    if (inFlight >= 50) {
      await new Promise<void>((resolve) => {
        wake = resolve;
        setTimeout(resolve, 200);
      });
      continue;
    }
    const stream = streamIds[time % streamIds.length];
    const reading = { stream, time };
    const values = Array.from(spectrumAt(plant, stream, time));
    inFlight++;
    client.publish(
      `${prefix}/${stream}/reading`,
      JSON.stringify({ time, sequence: time, values }),
      { qos: 1 },
      (error) => {
        inFlight--;
        if (!error) acknowledged.push(reading);
        wake();
        void enough(acknowledged.length);
      },
    );
    time++;
    if (time % 10 === 0) await new Promise((resolve) => setImmediate(resolve));
  }
  client.end(true);
  return { acknowledged, sent: time - start, next: time };
}

test(`a service killed ${kills} times under load has every reading whose publisher had its PUBACK`, async () => {
  let chain = await startChain();
  const begin = Date.now() - 3_600_000;
  let start = begin;
  const acknowledged: { stream: PlantStreamId; time: number }[] = [];
  let sent = 0;
  for (let kill = 0; kill < kills; kill++) {
    // Somewhere in the stream of acknowledgements, each time elsewhere.
    const after = 40 + ((kill * 137) % 400);
    let killed: Promise<void> | undefined;
    const run = await publishUntilBroken(chain, start, (count) => {
      if (count >= after) killed ??= chain.kill();
    });
    await killed;
    acknowledged.push(...run.acknowledged);
    sent += run.sent;
    start = run.next;
    chain = await chain.again();
  }
  await eventually("the inbox drained", async () => {
    const { events } = await chain.get<{ events: { kind: string }[] }>("/events?limit=1");
    const missing = await missingOf(chain, acknowledged, begin, start);
    return events.length > 0 && missing.length === 0;
  });
  expect(acknowledged.length).toBeGreaterThan(kills * 40);
  // What was sent and not acknowledged may be there or not; nothing else may.
  let recorded = 0;
  for (const stream of streamIds) recorded += (await recordedTimes(chain.url, stream, begin, start)).size;
  expect(recorded).toBeGreaterThanOrEqual(acknowledged.length);
  expect(recorded).toBeLessThanOrEqual(sent);
  console.log(`${kills} kills: ${sent} sent, ${acknowledged.length} acknowledged, ${recorded} on record`);
  expect(await chain.stop()).toBe(0);
  chain.remove();
}, 600_000);

async function missingOf(chain: Chain, acknowledged: { stream: string; time: number }[], from: number, to: number) {
  const recorded = new Map<string, Set<number>>();
  for (const stream of streamIds) recorded.set(stream, await recordedTimes(chain.url, stream, from, to));
  return acknowledged.filter(({ stream, time }) => !recorded.get(stream)!.has(time));
}

test("an open alarm, its excursion and the count of readings in a row survive a kill", async () => {
  let chain = await startChain();
  let time = Date.now() - 60_000;
  const publish = async (add: number) => {
    time += 100;
    const values = Array.from(spectrumAt(plant, "bq-305", time), (value, j) => value + (j > 200 && j < 230 ? add : 0));
    await chain.publish("bq-305", { time, sequence: time, values });
  };
  type Alarms = { alarms: { key: string; state: string; raisedAt: number }[] };
  const alarms = async () => (await chain.get<Alarms>("/alarms")).alarms;
  await publish(0);
  await publish(0.1);
  await publish(0.1);
  await chain.kill();
  chain = await chain.again();
  expect(await alarms()).toEqual([]);
  // The third in a row, by the count from before the kill.
  await publish(0.1);
  const [raised] = await eventually("the alarm", async () => {
    const open = (await alarms()).filter(({ key }) => key === "unfamiliar");
    return open.length > 0 ? open : undefined;
  });
  await chain.kill();
  chain = await chain.again();
  expect((await alarms()).filter(({ key }) => key === "unfamiliar")).toEqual([raised]);
  await chain.stop();
  chain.remove();
});
