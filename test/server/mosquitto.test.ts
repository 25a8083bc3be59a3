import { execFileSync } from "node:child_process";
import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { connectAsync, type IClientOptions } from "mqtt";
import { afterAll, beforeAll, expect, test } from "vitest";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, eventually, prefix, startChain } from "../chain.ts";
import { startMosquitto } from "../mosquitto.ts";
import { serve } from "../serve.ts";

const plant = makePlant(1);
let demo: Chain;
let sequence = 0;
let time = Date.now() - 3_000_000;

beforeAll(async () => {
  demo = await startChain();
  await demo.stop();
});
afterAll(() => demo.remove());

/** The demo's plant at another broker; its record goes on from test to test. */
function settingsWith(broker: object): string {
  const file = join(demo.folder, "mosquitto.json");
  const settings = JSON.parse(readFileSync(join(demo.folder, "plant.json"), "utf8"));
  settings.http.port = 0;
  settings.mqtt.broker = broker;
  writeFileSync(file, JSON.stringify(settings));
  return file;
}

async function publish(url: string, count: number, options: IClientOptions = {}) {
  const client = await connectAsync(url, options);
  const sent: number[] = [];
  const all: Promise<unknown>[] = [];
  for (let i = 0; i < count; i++) {
    time += 100;
    sent.push(time);
    const values = Array.from(spectrumAt(plant, "bq-201", time));
    const reading = JSON.stringify({ time, sequence: sequence++, values });
    all.push(client.publishAsync(`${prefix}/bq-201/reading`, reading, { qos: 1 }));
  }
  await Promise.all(all);
  await client.endAsync();
  return sent;
}

async function recordedOf(url: string, times: number[]): Promise<number> {
  const [from, to] = [times[0], times[times.length - 1] + 1];
  const answer = await fetch(`${url}/api/v1/streams/bq-201/trend?from=${from}&to=${to}&points=5000`);
  const recorded = new Set(((await answer.json()) as { time: number[] }).time);
  return times.filter((at) => recorded.has(at)).length;
}

const password = "a word that must stay secret";

test.each(["3.1.1", "5"])(
  "Mosquitto by MQTT %s with user and password: nothing is lost while engine or broker is away",
  async (version) => {
    const broker = await startMosquitto(
      (folder) => [`password_file ${folder}/people`, "allow_anonymous false", "max_queued_messages 0"],
      (folder) => execFileSync("mosquitto_passwd", ["-b", "-c", join(folder, "people"), "engine", password]),
    );
    const url = `mqtt://127.0.0.1:${broker.port}`;
    const login = { username: "engine", password };
    const config = settingsWith({
      url,
      version,
      username: "engine",
      passwordFrom: "BROKER_WORD",
      clientId: `brindle-${version}`,
    });
    const environment = { BROKER_WORD: password };

    let service = await serve(config, environment);
    await eventually("the subscription", () => service.printed().includes("broker reached"));
    const first = await publish(url, 300, login);
    await eventually("all on record", async () => (await recordedOf(service.url, first)) === 300);

    // The engine is away.
    expect(await service.stop()).toBe(0);
    const second = await publish(url, 300, login);
    service = await serve(config, environment);
    await eventually("all on record", async () => (await recordedOf(service.url, second)) === 300);
    expect(service.printed()).toContain("session resumed");

    // The broker is away and comes back, with what it had promised to keep.
    await broker.stop();
    await eventually("the service not ready", async () => (await fetch(`${service.url}/readyz`)).status === 503);
    await broker.start();
    const third = await publish(url, 300, login);
    await eventually("all on record", async () => (await recordedOf(service.url, third)) === 300);
    await eventually("the service ready", async () => (await fetch(`${service.url}/readyz`)).status === 200);

    expect(await service.stop()).toBe(0);
    expect(service.printed()).not.toContain(password);
    await broker.remove();
  },
);

test("Mosquitto by TLS, each side with a certificate that the other asks for", async () => {
  const ssl = (folder: string, ...args: string[]) => execFileSync("openssl", args, { cwd: folder, stdio: "ignore" });
  const newKey = ["-newkey", "ec", "-pkeyopt", "ec_paramgen_curve:P-256", "-nodes", "-days", "2"];
  const signed = (folder: string, name: string, alternative: string) => {
    ssl(folder, "req", ...newKey.slice(0, 5), "-keyout", `${name}.key`, "-out", `${name}.csr`, "-subj", `/CN=${name}`);
    writeFileSync(join(folder, `${name}.ext`), `subjectAltName=${alternative}\n`);
    const by = ["-CA", "ca.pem", "-CAkey", "ca.key", "-CAcreateserial", "-days", "2"];
    ssl(folder, "x509", "-req", "-in", `${name}.csr`, ...by, "-extfile", `${name}.ext`, "-out", `${name}.pem`);
  };
  const broker = await startMosquitto(
    (folder) => [
      ...["cafile ca", "certfile broker", "keyfile broker"].map((line) => {
        const [what, name] = line.split(" ");
        return `${what} ${folder}/${name}.${what === "keyfile" ? "key" : "pem"}`;
      }),
      "require_certificate true",
      "use_identity_as_username true",
    ],
    (folder) => {
      ssl(folder, "req", "-x509", ...newKey, "-keyout", "ca.key", "-out", "ca.pem", "-subj", "/CN=invented");
      signed(folder, "broker", "IP:127.0.0.1");
      signed(folder, "engine", "DNS:engine");
    },
  );
  const url = `mqtts://127.0.0.1:${broker.port}`;
  const pem = (name: string) => join(broker.folder, name);
  const tls = { ca: pem("ca.pem"), certificate: pem("engine.pem"), key: pem("engine.key") };
  const read = { ca: readFileSync(tls.ca), cert: readFileSync(tls.certificate), key: readFileSync(tls.key) };

  const service = await serve(settingsWith({ url, version: "5", clientId: "brindle-tls", tls }));
  await eventually("the subscription", () => service.printed().includes("broker reached"));
  const sent = await publish(url, 50, read);
  await eventually("all on record", async () => (await recordedOf(service.url, sent)) === 50);
  expect(await service.stop()).toBe(0);

  // A broker that nobody vouches for is not spoken to.
  const strict = await serve(settingsWith({ url, version: "5", clientId: "brindle-tls" }));
  await eventually("the reason", () => /broker mqtts:[^"]*self.signed certificate/i.test(strict.printed()));
  expect((await fetch(`${strict.url}/readyz`)).status).toBe(503);
  expect(await strict.stop()).toBe(0);
  await broker.remove();
});

test("readings that a broker's short queue has dropped without a word are missed, and it is said which", async () => {
  const broker = await startMosquitto(() => [
    "allow_anonymous true",
    "max_queued_messages 40",
    "max_inflight_messages 20",
  ]);
  const url = `mqtt://127.0.0.1:${broker.port}`;
  const config = settingsWith({ url, clientId: "brindle-short" });
  let service = await serve(config);
  await eventually("the subscription", () => service.printed().includes("broker reached"));
  const before = await publish(url, 30);
  await eventually("all on record", async () => (await recordedOf(service.url, before)) === 30);
  await service.stop();
  const first = sequence;
  await publish(url, 200);
  service = await serve(config);
  await eventually("the session", () => service.printed().includes("session resumed"));
  const after = await publish(url, 5);
  await eventually("the last on record", async () => (await recordedOf(service.url, after)) === 5);
  const answer = await fetch(`${service.url}/api/v1/events?stream=bq-201&limit=100`);
  const { events } = (await answer.json()) as { events: { kind: string; says: string }[] };
  const gap = events.find(({ kind }) => kind === "sequence gap")!;
  const [, from, to] = /readings (\d+) to (\d+) are missing/.exec(gap.says)!.map(Number);
  // It keeps the first of them, as many as its queue holds.
  expect(from).toBeGreaterThanOrEqual(first + 40);
  expect(from).toBeLessThanOrEqual(first + 60);
  expect(to).toBe(first + 199);
  await eventually("the gap among the figures", async () =>
    (await (await fetch(`${service.url}/metrics`)).text()).includes('millrace_events_total{kind="sequence gap"} 1'),
  );
  expect(await service.stop()).toBe(0);
  await broker.remove();
});
