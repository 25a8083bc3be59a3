import { parentPort, Worker, workerData } from "node:worker_threads";
import { Encoder } from "cbor-x";
import { connectAsync } from "mqtt";
import { inventedSpectra } from "./invented-spectra.ts";

export interface PublishOrder {
  brokerUrl: string;
  topics: string[];
  count: number;
  /** most without PUBACK */
  inFlight: number;
  /** of the first reading, epoch ms; each next is a millisecond later, which is also its sequence */
  begin: number;
}

/** Publishes from a thread of its own, as fast as PUBACKs come; resolves when the last has come. */
export function publishAll(order: PublishOrder): Promise<void> {
  const worker = new Worker(new URL(import.meta.url), { workerData: order });
  return new Promise((resolve, reject) => {
    worker.once("message", () => resolve());
    worker.once("error", reject);
  });
}

/** Readings of 1 000 channels in CBOR, a Float32Array as a typed array of RFC 8746; none is like the one before. */
export function payloads(): (time: number) => Buffer {
  const cbor = new Encoder({ useRecords: false, variableMapSize: true, tagUint8Array: false });
  const spectra = inventedSpectra(64, 1000, { seed: 3 }).spectra.rows.map((row) => Float32Array.from(row));
  return (time) => cbor.encode({ time, sequence: time, values: spectra[time % spectra.length] });
}

async function run({ brokerUrl, topics, count, inFlight, begin }: PublishOrder): Promise<void> {
  const payload = payloads();
  const client = await connectAsync(brokerUrl);
  let sent = 0;
  let done = 0;
  await new Promise<void>((resolve, reject) => {
    const next = () => {
      if (sent >= count) return;
      const i = sent++;
      client.publish(topics[i % topics.length], payload(begin + i), { qos: 1 }, (error) => {
        if (error) reject(error);
        if (++done === count) resolve();
        else next();
      });
    };
    for (let i = 0; i < inFlight; i++) next();
  });
  await client.endAsync();
}

if (parentPort && workerData) {
  await run(workerData as PublishOrder);
  parentPort.postMessage("done");
}
