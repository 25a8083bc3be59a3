import { spawn } from "node:child_process";
import { readFileSync, writeFileSync } from "node:fs";
import { createServer, type Socket } from "node:net";
import { join } from "node:path";
import { Aedes } from "aedes";
import { connectAsync } from "mqtt";
import { expect, test } from "vitest";
import type { RecordedEvent, SetAsideAlarm } from "../../core/messages/index.ts";
import { eventually, prefix, startChain } from "../chain.ts";
import { program } from "../program.ts";

async function serve(config: string) {
  const child = spawn(process.execPath, [program, "serve", "--config", config], { stdio: ["ignore", "pipe", "pipe"] });
  let printed = "";
  for (const stream of [child.stdout, child.stderr]) stream.on("data", (chunk) => (printed += String(chunk)));
  const url = await eventually("the service's address", () => /(http:\/\/127\.0\.0\.1:\d+)/.exec(printed)?.[1]);
  return {
    url,
    stop: () =>
      new Promise<number | null>((resolve) => {
        child.once("exit", resolve);
        child.kill("SIGTERM");
      }),
  };
}

test("what the plant said of the process before the service came waits, retained, at an external broker", async () => {
  const demo = await startChain();
  await demo.stop();
  const aedes = await Aedes.createBroker();
  const sockets = new Set<Socket>();
  const server = createServer((socket) => {
    sockets.add(socket);
    aedes.handle(socket);
  });
  await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
  const url = `mqtt://127.0.0.1:${(server.address() as { port: number }).port}`;
  const config = join(demo.folder, "plant.json");
  const settings = JSON.parse(readFileSync(config, "utf8"));
  settings.http.port = 0;
  settings.mqtt.broker = { url, clientId: "brindle" };
  writeFileSync(config, JSON.stringify(settings));

  const plant = await connectAsync(url);
  const state = JSON.stringify({ time: new Date(Date.now() - 60_000).toISOString(), state: "cleaning", grade: "fine" });
  await plant.publishAsync(`${prefix}/bq-201/state`, state, { qos: 1, retain: true });
  const service = await serve(config);
  const get = async <T>(path: string) => (await (await fetch(`${service.url}/api/v1${path}`)).json()) as T;
  await eventually("the suppression", async () => {
    const { setAside } = await get<{ setAside: SetAsideAlarm[] }>("/alarms");
    return setAside.some(({ stream, state }) => stream === "bq-201" && state === "suppressed");
  });
  const { events } = await get<{ events: RecordedEvent[] }>("/events?stream=bq-201");
  expect(events.filter(({ kind }) => kind === "process state").map(({ says }) => says)).toEqual([
    "The process is cleaning, grade fine.",
  ]);

  expect(await service.stop()).toBe(0);
  await plant.endAsync(true);
  for (const socket of sockets) socket.destroy();
  await new Promise<void>((resolve) => aedes.close(() => resolve()));
  await new Promise<void>((resolve) => server.close(() => resolve()));
  demo.remove();
});
