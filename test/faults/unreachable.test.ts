import { readFileSync, writeFileSync } from "node:fs";
import { connect, createServer, type Socket } from "node:net";
import { join } from "node:path";
import { expect, test } from "vitest";
import { eventually, startChain } from "../chain.ts";
import { startMosquitto } from "../mosquitto.ts";
import { serve } from "../serve.ts";
import { everyOneRecorded, startLoad } from "./load.ts";

const awaySeconds = process.env.MILLRACE_FULL === "1" ? 60 : 8;

/** A cable between the engine and its broker: pulled out, connections stay open and nothing comes through; then they break. */
async function cable(port: number) {
  const pairs = new Set<[Socket, Socket]>();
  let isOut = false;
  const server = createServer((near) => {
    if (isOut) {
      near.destroy();
      return;
    }
    const far = connect(port, "127.0.0.1");
    const pair: [Socket, Socket] = [near, far];
    pairs.add(pair);
    near.pipe(far);
    far.pipe(near);
    for (const socket of pair) {
      socket.on("error", () => {});
      socket.on("close", () => {
        for (const end of pair) end.destroy();
        pairs.delete(pair);
      });
    }
  });
  await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
  return {
    port: (server.address() as { port: number }).port,
    pull() {
      isOut = true;
      for (const [near, far] of pairs) {
        near.unpipe(far);
        far.unpipe(near);
      }
    },
    plugIn() {
      isOut = false;
      for (const [near] of pairs) near.destroy();
    },
    close: () => new Promise<void>((resolve) => server.close(() => resolve())),
  };
}

test(`a broker that is unreachable for ${awaySeconds} s, and then restarts: everything that it acknowledged comes on record`, async () => {
  const made = await startChain();
  await made.stop();
  const broker = await startMosquitto(() => ["allow_anonymous true", "max_queued_messages 0"]);
  const line = await cable(broker.port);
  const config = join(made.folder, "plant.json");
  const settings = JSON.parse(readFileSync(config, "utf8"));
  settings.http.port = 0;
  settings.mqtt.broker = { url: `mqtt://127.0.0.1:${line.port}`, keepAliveSeconds: 2 };
  writeFileSync(config, JSON.stringify(settings));
  const service = await serve(config);
  await eventually("the subscription", () => service.printed().includes("broker reached"));
  const load = await startLoad(`mqtt://127.0.0.1:${broker.port}`, Date.now() - 3_600_000);
  await eventually("readings", () => load.acknowledged.length > 50);

  line.pull();
  await eventually("said", async () => (await fetch(`${service.url}/readyz`)).status === 503, 30_000);
  const before = load.acknowledged.length;
  await new Promise((resolve) => setTimeout(resolve, awaySeconds * 1000));
  expect(load.acknowledged.length).toBeGreaterThan(before + 50);
  line.plugIn();
  await eventually("reached", async () => (await fetch(`${service.url}/readyz`)).status === 200, 60_000);

  await broker.stop();
  await broker.start();
  await eventually("reached again", async () => (await fetch(`${service.url}/readyz`)).status === 200, 60_000);
  await load.stop();
  await everyOneRecorded(service.url, load.acknowledged);
  console.log(`broker unreachable for ${awaySeconds} s: ${load.acknowledged.length} acknowledged, all on record`);
  expect(await service.stop()).toBe(0);
  await broker.remove();
  await line.close();
  made.remove();
}, 240_000);
