import type { ChildProcess } from "node:child_process";
import { cpSync, existsSync, mkdirSync, readFileSync, writeFileSync } from "node:fs";
import { join, resolve } from "node:path";
import { fileURLToPath } from "node:url";
import { Command, InvalidArgumentError } from "commander";
import { type PlantConfig, readPlantConfig } from "../config/plant-config.ts";
import { caution } from "../gateway/plant-view.ts";
import { loadHistory } from "../load/load-history.ts";
import { readingsOfCborSequence } from "../load/readings.ts";
import { logOf } from "../log.ts";
import { inventedPeople } from "../people/invented.ts";
import { type Service, startService } from "../service.ts";
import { writeDemoHandover } from "./demo-handover.ts";
import { makeDemoModels } from "./demo-models.ts";
import { endOf, spawnSimulator } from "./simulator-process.ts";
import { untilStopped } from "./until-stopped.ts";

interface Options {
  data: string;
  port?: number;
  mqttPort?: number;
  scenario: string;
  historyDays: number;
}

const logLine = logOf("demo");
const historyPeriodMs = 30_000;
const day = 24 * 3600 * 1000;

/** `demo`: broker, engine, gateway, simulator and two weeks of history in one go. */
export function demoCommand(): Command {
  return new Command("demo")
    .description("run an invented plant: broker, engine, screens, simulator and two weeks of history in one go")
    .option("--data <folder>", "where the record, the models and the settings are kept", "data")
    .option("--port <number>", "port of the screens (default: 8480)", portNumber)
    .option("--mqtt-port <number>", "port of the MQTT broker (default: 18480)", portNumber)
    .option("--scenario <name|file>", "what happens: calm, demo, faults, or a file; none: no simulator", "demo")
    .option("--history-days <number>", "days of recorded history before the first start", daysNumber, 14)
    .action(run);
}

async function run(options: Options): Promise<void> {
  const began = performance.now();
  const folder = resolve(options.data);
  await untilStopped(async (stopWith) => {
    const config = await prepare(folder, options);
    const service = await startService(config, { died: stopWith });
    const simulator = options.scenario === "none" ? undefined : startSimulator(service, config, options.scenario);
    announce(service, began, options);
    const history = startHistory(service, config, folder, options.historyDays).catch((error: Error) => {
      logLine(`The history could not be brought in: ${error.message} Start again to go on with it.`);
    });
    return async () => {
      simulator?.kill("SIGTERM");
      historyProcess?.kill("SIGTERM");
      await history;
      await service.stop();
    };
  });
}

/** Everything that is made once: the settings, and models fitted by `calibrate` on the simulator's tables. */
async function prepare(folder: string, options: Options): Promise<PlantConfig> {
  const file = join(folder, "plant.json");
  if (!existsSync(file)) {
    mkdirSync(folder, { recursive: true });
    const template = fileURLToPath(new URL("../../../simulator/brindle-quay", import.meta.url));
    const settings = JSON.parse(readFileSync(join(template, "plant.json"), "utf8")) as PlantConfig;
    await makeDemoModels(folder);
    for (const { alarms } of settings.streams) cpSync(join(template, alarms!), join(folder, alarms!));
    // Last: a folder with these settings has all that they name.
    cpSync(join(template, "plant.json"), file);
  }
  const config = readPlantConfig(file);
  const { broker } = config.mqtt;
  if (options.port !== undefined) config.http.port = options.port;
  if (options.mqttPort !== undefined && "embedded" in broker) broker.embedded.port = options.mqttPort;
  return config;
}

function startSimulator(service: Service, config: PlantConfig, scenario: string): ChildProcess {
  const { prefix } = config.mqtt;
  const periodMs = String(config.streams[0].periodMs);
  const args = [
    "run",
    "--broker",
    service.brokerUrl,
    "--prefix",
    prefix,
    "--site",
    config.site,
    "--scenario",
    scenario,
  ];
  const child = spawnSimulator([...args, "--period-ms", periodMs], "inherit");
  endOf(child, "the simulator").catch((error: Error) => {
    if (!child.killed) logLine(error.message);
  });
  return child;
}

function announce(service: Service, began: number, options: Options): void {
  const seconds = ((performance.now() - began) / 1000).toFixed(1);
  console.log(`
Brindle Quay, an invented plant, is running (after ${seconds} s).

  Open  ${service.url}

Watch shows three streams live. About 75 s after the start something unforeseen appears in the recycled blend (bq-305):
see its number lose its trust, the alarm come up, and acknowledge it. Click a trend to see why a reading was judged so.
Handover signs a shift over: ${inventedPeople.map(({ name, password }) => `${name} with the password ${password}`).join(", ")}.
Readings arrive by MQTT at ${service.brokerUrl}. Settings, models and the record are in ${options.data}. Ctrl-C stops.

${caution}
`);
}

let historyProcess: ChildProcess | undefined;

/** Brings in the recorded weeks before the first start, once; an interrupted load goes on where it stopped. */
async function startHistory(service: Service, config: PlantConfig, folder: string, days: number): Promise<void> {
  const marker = join(folder, "history.json");
  const plan = existsSync(marker) ? (JSON.parse(readFileSync(marker, "utf8")) as HistoryPlan) : newPlan(days);
  writeFileSync(marker, JSON.stringify(plan));
  if (plan.done || plan.to <= plan.from) return;
  const began = performance.now();
  const expected = ((plan.to - plan.from) / historyPeriodMs) * config.streams.length;
  const truth = join(folder, "history-truth.json");
  const range = ["--from", String(plan.from), "--to", String(plan.to), "--period-ms", String(historyPeriodMs)];
  const child = spawnSimulator(["history", ...range, "--truth", truth], "stdout");
  historyProcess = child;
  const ended = endOf(child, "the simulator's history");
  ended.catch(() => {}); // heard below, after the readings that came
  let printed = 0;
  await loadHistory(service.engine, {
    items: readingsOfCborSequence(child.stdout!),
    expected,
    onProgress(done) {
      const tenth = Math.floor((10 * done) / expected);
      if (tenth <= printed) return;
      printed = tenth;
      console.log(`history: ${done} of ${Math.round(expected)} readings scored and recorded`);
    },
  });
  await ended;
  await writeDemoHandover(service, config);
  writeFileSync(marker, JSON.stringify({ ...plan, done: true }));
  const seconds = ((performance.now() - began) / 1000).toFixed(0);
  console.log(`history: ${days} days are on record after ${seconds} s`);
}

interface HistoryPlan {
  from: number;
  to: number;
  done: boolean;
}

/** Up to this minute; fixed at the first start, so that a second one asks for the same readings and finds them there. */
function newPlan(days: number): HistoryPlan {
  const to = Math.floor(Date.now() / 60_000) * 60_000;
  return { from: to - days * day, to, done: false };
}

function portNumber(text: string): number {
  const port = Number(text);
  if (!Number.isInteger(port) || port < 0 || port > 65535)
    throw new InvalidArgumentError("expected 0 to 65535 (0: any free one)");
  return port;
}

function daysNumber(text: string): number {
  const days = Number(text);
  if (!(days >= 0 && days <= 400)) throw new InvalidArgumentError("expected 0 to 400");
  return days;
}
