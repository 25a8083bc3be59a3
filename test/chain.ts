import { type ChildProcess, spawn } from "node:child_process";
import { cpSync, existsSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { connectAsync, type MqttClient } from "mqtt";
import { dist, program } from "./program.ts";

export const prefix = "millrace/brindle-quay";

/** A whole Millrace in processes of its own: broker, engine, gateway and screens, with the demo's settings. */
export interface Chain {
  /** of the screens */
  url: string;
  brokerUrl: string;
  folder: string;
  /** what the service has printed so far */
  printed: () => string;
  /** Publishes one reading at QoS 1; resolves with its PUBACK. */
  publish: (stream: string, reading: Record<string, unknown>) => Promise<void>;
  publishRaw: (topic: string, payload: string | Buffer) => Promise<void>;
  get: <T>(path: string) => Promise<T>;
  /** Ctrl-C, and waits for the end; resolves with the exit code. */
  stop: () => Promise<number | null>;
  /** SIGKILL to the service (the simulator, if any, stops by itself when its broker is gone) */
  kill: () => Promise<void>;
  /** Starts the same folder again. */
  again: () => Promise<Chain>;
  remove: () => void;
}

export interface ChainOptions {
  /** the demo's own simulator and its scenario; none: a test publishes by itself */
  simulate?: "demo" | "calm" | "none";
  historyDays?: number;
  folder?: string;
  /** of the service's process, besides our own */
  environment?: Record<string, string>;
}

/** Starts the real chain on free ports in a folder of its own. The models are made once a run and copied. */
export async function startChain(options: ChainOptions = {}): Promise<Chain> {
  const folder = options.folder ?? mkdtempSync(join(tmpdir(), "millrace-test-"));
  if (!options.folder) await copyModels(folder);
  const { simulate = "none", historyDays = 0, environment = {} } = options;
  const args = ["demo", "--data", folder, "--port", "0", "--mqtt-port", "0"];
  const child = spawn(
    process.execPath,
    [program, ...args, "--scenario", simulate, "--history-days", String(historyDays)],
    { stdio: ["ignore", "pipe", "pipe"], env: { ...process.env, ...environment } },
  );
  let printed = "";
  for (const stream of [child.stdout, child.stderr]) stream.on("data", (chunk) => (printed += String(chunk)));
  const [url, brokerUrl] = await addresses(child, () => printed);
  let publisher: MqttClient | undefined;
  const client = async () => (publisher ??= await connectAsync(brokerUrl, { reconnectPeriod: 0 }));
  const publishRaw = async (topic: string, payload: string | Buffer) => {
    await (await client()).publishAsync(topic, payload, { qos: 1 });
  };
  const end = async (signal: NodeJS.Signals) => {
    publisher?.on("error", () => {});
    if (signal !== "SIGKILL") await publisher?.endAsync(true);
    const exited = new Promise<number | null>((resolve) => child.once("exit", (code) => resolve(code)));
    if (child.exitCode !== null) return child.exitCode;
    child.kill(signal);
    const code = await exited;
    publisher?.end(true);
    return code;
  };
  return {
    url,
    brokerUrl,
    folder,
    printed: () => printed,
    publishRaw,
    publish: (stream, reading) => publishRaw(`${prefix}/${stream}/reading`, JSON.stringify(reading)),
    async get<T>(path: string): Promise<T> {
      const answer = await fetch(`${url}/api/v1${path}`);
      const body = (await answer.json()) as T;
      if (!answer.ok) throw new Error(`${path}: ${answer.status} ${JSON.stringify(body)}`);
      return body;
    },
    stop: () => end("SIGINT"),
    kill: async () => void (await end("SIGKILL")),
    again: () => startChain({ ...options, folder }),
    remove: () => rmSync(folder, { recursive: true, force: true }),
  };
}

/** Waits until `look` gives something true; fails with what it was last. */
export async function eventually<T>(
  what: string,
  look: () => Promise<T> | T,
  withinMs = 15_000,
): Promise<NonNullable<T>> {
  const end = Date.now() + withinMs;
  for (;;) {
    const seen = await look();
    if (seen) return seen;
    if (Date.now() > end) throw new Error(`not within ${withinMs} ms: ${what}; last seen: ${JSON.stringify(seen)}`);
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}

function addresses(child: ChildProcess, printed: () => string): Promise<[string, string]> {
  return new Promise((resolve, reject) => {
    const look = () => {
      const screens = /Open\s+(http:\/\/\S+)/.exec(printed());
      const broker = /MQTT at (mqtt:\/\/[\d.]+:\d+)/.exec(printed());
      if (screens && broker) resolve([screens[1], broker[1]]);
    };
    child.stdout!.on("data", look);
    child.once("exit", (code) => reject(new Error(`the service ended with ${code}:\n${printed()}`)));
  });
}

const models = join(dist, "test-models");

/** Fitting the demo's models takes seconds: every chain of a run starts from the same files, made by the first. */
async function copyModels(folder: string): Promise<void> {
  mkdirSync(folder, { recursive: true });
  if (!existsSync(join(models, "plant.json"))) return; // the first start makes them
  for (const file of readdirSync(models)) cpSync(join(models, file), join(folder, file), { recursive: true });
}

/** Makes the demo's models once, by the product itself, for all chains of a run. */
export async function makeModels(): Promise<void> {
  rmSync(models, { recursive: true, force: true });
  const chain = await startChain();
  await chain.stop();
  mkdirSync(models, { recursive: true });
  for (const file of readdirSync(chain.folder)) {
    const keep = file.endsWith(".model.json") || file.endsWith(".alarms.json") || file === "plant.json";
    if (keep) writeFileSync(join(models, file), readFileSync(join(chain.folder, file)));
  }
  chain.remove();
}
