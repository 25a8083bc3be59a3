import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { freshState } from "../../core/judging/index.ts";
import type { LimitSet } from "../../core/limit-set/index.ts";
import type { Judged } from "../../core/messages/index.ts";
import { sqliteWriter } from "../../server/store/sqlite/writer.ts";
import type { NewReading } from "../../server/store/store.ts";
import { startChain } from "../chain.ts";
import { freePort } from "../mosquitto.ts";
import { type Served, serve } from "../serve.ts";

export interface ManyStreams {
  served: Served;
  brokerUrl: string;
  streams: { id: string; like: string }[];
  folder: string;
}

const kinds = ["bq-201", "bq-305", "bq-410"] as const;

/**
 * A service with `count` streams, each with one of the demo's models, that expect a reading every `periodMs`.
 *
 * @param history of every stream, written straight to the record: judged readings without spectra, one every `everyMs`
 */
export async function serveMany(
  count: number,
  periodMs: number,
  history?: { spanMs: number; everyMs: number },
): Promise<ManyStreams> {
  const made = await startChain();
  await made.stop();
  const file = join(made.folder, "plant.json");
  const plant = JSON.parse(readFileSync(file, "utf8"));
  const port = await freePort();
  const streams = Array.from({ length: count }, (_, i) => ({
    id: `s-${String(i + 1).padStart(2, "0")}`,
    like: kinds[i % kinds.length],
  }));
  plant.data = "many";
  plant.http = { host: "127.0.0.1", port: 0 };
  plant.mqtt.broker = { embedded: { host: "127.0.0.1", port } };
  plant.streams = streams.map(({ id, like }) => ({
    ...plant.streams.find((each: { id: string }) => each.id === like),
    ...{ id, name: `Line ${id.slice(2)}`, periodMs },
  }));
  const config = join(made.folder, "many.json");
  writeFileSync(config, JSON.stringify(plant));
  let served = await serve(config);
  if (history) {
    await served.stop(); // the first start has put models and limit sets on record
    for (const { id } of streams) writeHistory(join(made.folder, "many", "record.db"), id, history);
    served = await serve(config);
  }
  return { served, brokerUrl: `mqtt://127.0.0.1:${port}`, streams, folder: made.folder };
}

function writeHistory(file: string, stream: string, { spanMs, everyMs }: { spanMs: number; everyMs: number }): void {
  const writer = sqliteWriter(file);
  const limitSet = writer.limitSet(stream) as LimitSet;
  const text = writer.modelText(limitSet.model) as string;
  const names = (JSON.parse(text) as { properties: { name: string; range: [number, number] }[] }).properties;
  const end = Date.now();
  const readings: NewReading[] = [];
  for (let time = end - spanMs; time < end; time += everyMs) {
    const turn = (time / 3_600_000) * 2 * Math.PI;
    const judged: Judged = {
      stream,
      time,
      sequence: Math.round(time / everyMs),
      properties: Object.fromEntries(
        names.map(({ name, range: [low, high] }) => [
          name,
          { value: (low + high) / 2 + ((high - low) / 5) * Math.sin(turn), uncertainty: 0.1 },
        ]),
      ),
      t2: 3,
      q: 1e-4,
      leverage: 0.1,
      nearest: 1,
      ratios: { t2: 0.5 + 0.3 * Math.sin(turn), q: 0.6 + 0.3 * Math.cos(turn * 3), nearest: 0.5 },
      verdict: ["inside"],
      model: limitSet.model,
      limitSet: limitSet.version,
    };
    readings.push({
      judged,
      receivedAt: time,
      late: false,
      history: true,
      gapFrom: null,
      values: Float64Array.of(0.5),
    });
  }
  for (let i = 0; i < readings.length; i += 5000) {
    const states = new Map([[stream, freshState]]);
    const portion = readings.slice(i, i + 5000);
    writer.commit({ readings: portion, refusals: [], events: [], excursions: [], states });
  }
  writer.close();
}
