import { spawn } from "node:child_process";
import { readFileSync, writeFileSync } from "node:fs";
import { createServer, type Server, type Socket } from "node:net";
import { join } from "node:path";
import { Aedes } from "aedes";
import { connectAsync } from "mqtt";
import { expect, test } from "vitest";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { eventually, prefix, startChain } from "../chain.ts";
import { program } from "../program.ts";

const plant = makePlant(1);

/** A broker of its own, outside the service, that can lose its links and get them back. */
async function startBroker() {
  const aedes = await Aedes.createBroker();
  const sockets = new Set<Socket>();
  const server: Server = createServer((socket) => {
    sockets.add(socket);
    socket.on("close", () => sockets.delete(socket));
    aedes.handle(socket);
  });
  await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
  const { port } = server.address() as { port: number };
  return {
    url: `mqtt://127.0.0.1:${port}`,
    cut: () => {
      for (const socket of sockets) socket.destroy();
    },
    close: async () => {
      for (const socket of sockets) socket.destroy();
      await new Promise<void>((resolve) => aedes.close(() => resolve()));
      await new Promise<void>((resolve) => server.close(() => resolve()));
    },
  };
}

async function serve(config: string) {
  const child = spawn(process.execPath, [program, "serve", "--config", config], { stdio: ["ignore", "pipe", "pipe"] });
  let printed = "";
  for (const stream of [child.stdout, child.stderr]) stream.on("data", (chunk) => (printed += String(chunk)));
  const url = await eventually("the service's address", () => /: (http:\/\/127\.0\.0\.1:\d+)/.exec(printed)?.[1]);
  return {
    url,
    printed: () => printed,
    async stop() {
      const exited = new Promise<number | null>((resolve) => child.once("exit", (code) => resolve(code)));
      child.kill("SIGTERM");
      return exited;
    },
  };
}

test("with an external broker: QoS 1, persistent session, nothing lost while the engine or the link is away, results and status published", async () => {
  const demo = await startChain();
  await demo.stop();
  const broker = await startBroker();
  const config = join(demo.folder, "plant.json");
  const settings = JSON.parse(readFileSync(config, "utf8"));
  settings.http.port = 0;
  settings.mqtt.broker = { url: broker.url, clientId: "brindle" };
  writeFileSync(config, JSON.stringify(settings));

  const heard: { topic: string; text: string; retain: boolean }[] = [];
  const listener = await connectAsync(broker.url, { clientId: "listener" });
  listener.on("message", (topic, payload, { retain }) => heard.push({ topic, text: String(payload), retain }));
  await listener.subscribeAsync([`${prefix}/+/result`, `${prefix}/+/alarm`, `${prefix}/status`], { qos: 1 });

  let time = Date.now() - 300_000;
  const publish = async (count: number) => {
    for (let i = 0; i < count; i++) {
      time += 100;
      const values = Array.from(spectrumAt(plant, "bq-201", time));
      const reading = JSON.stringify({ time, sequence: time, values });
      await listener.publishAsync(`${prefix}/bq-201/reading`, reading, { qos: 1 });
    }
  };
  const from = time;
  const recorded = async (url: string) => {
    const answer = await fetch(`${url}/api/v1/streams/bq-201/trend?from=${from}&to=${time + 1}&points=5000`);
    return ((await answer.json()) as { time: number[] }).time.length;
  };

  let service = await serve(config);
  await eventually("the subscription", () => service.printed().includes("broker reached"));
  await publish(20);
  await eventually("20 on record", async () => (await recorded(service.url)) === 20);
  await eventually("20 results", () => heard.filter(({ topic }) => topic === `${prefix}/bq-201/result`).length === 20);
  const result = JSON.parse(heard.find(({ topic }) => topic.endsWith("/result"))!.text);
  expect(Object.keys(result)).toEqual([
    "time",
    "sequence",
    "properties",
    "t2",
    "q",
    "leverage",
    "nearest",
    "ratios",
    "verdict",
    "model",
    "limitSet",
  ]);

  // The link breaks: what comes meanwhile waits in the session.
  broker.cut();
  await eventually("the listener back", () => listener.connected);
  await publish(20);
  await eventually("40 on record", async () => (await recorded(service.url)) === 40);

  const brokerEvents = async () => {
    const answer = await fetch(`${service.url}/api/v1/events?about=broker`);
    return ((await answer.json()) as { events: { kind: string }[] }).events.map(({ kind }) => kind);
  };
  await eventually(
    "the loss of the broker on record, and its return",
    async () => (await brokerEvents()).slice(0, 2).join() === "broker reached,broker lost",
  );

  // The engine is away: the session is kept for it.
  expect(await service.stop()).toBe(0);
  await eventually(
    "the status",
    () => heard.findLast(({ topic }) => topic.endsWith("/status"))?.text === '{"running":false}',
  );
  await publish(20);
  service = await serve(config);
  await eventually("60 on record", async () => (await recorded(service.url)) === 60);
  expect(service.printed()).toContain("session resumed");

  expect(await service.stop()).toBe(0);
  await listener.endAsync(true);
  await broker.close();
  demo.remove();
});
