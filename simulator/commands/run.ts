import { once } from "node:events";
import { readFile } from "node:fs/promises";
import { Command } from "commander";
import { defaultSeed, makePlant, streamIds } from "../plant/index.ts";
import { startPublisher } from "../publisher/index.ts";
import { builtInScenarios, eventKinds, parseScenario, type Scenario, ScenarioError } from "../scenario/index.ts";
import { moment, periodNumber, positive, seedNumber, wholeNumber } from "./options.ts";
import { UsageError } from "./simulator-error.ts";

interface Options {
  broker: string;
  prefix: string;
  site: string;
  scenario: string;
  speed: number;
  start?: number;
  seed: number;
  periodMs: number;
  inFlight: number;
  quiet?: boolean;
}

const more = `
A scenario is one of ${Object.keys(builtInScenarios).join(", ")}, or a JSON file:
  { "format": "millrace-scenario", "formatVersion": 1, "name": "…", "repeatMinutes"?: 30, "events": [
    { "kind": "co-solvent", "stream": "bq-305", "startSeconds": 75, "durationSeconds": 240, "size"?: 1 } ] }
  kinds:   ${eventKinds.join(", ")}
  streams: ${streamIds.join(", ")}
Times count from the start of the run, in process time; size 1 is the usual size of such an event on that stream.

Process time runs --speed times as fast as the wall clock. The service refuses readings from the future, so a speed
above 1 needs a --start in the past; when process time has caught up with the wall clock it goes on at the wall clock's pace.`;

export function runCommand(): Command {
  return new Command("run")
    .description(
      "publish the plant live over MQTT (QoS 1) to <prefix>/<site>/<stream>/reading, …/state (retained) and …/lab",
    )
    .requiredOption("--broker <url>", "as mqtt://127.0.0.1:1883", brokerUrl)
    .option("--prefix <word>", "first part of the topics", "millrace")
    .option("--site <word>", "second part of the topics", "brindle-quay")
    .option("--scenario <file|name>", "what happens", "demo")
    .option("--speed <number>", "process time by wall-clock time", positive, 1)
    .option("--start <time>", "process time at which the run begins, RFC 3339 or epoch ms (default: now)", moment)
    .option("--seed <number>", "another plant, another number", seedNumber, defaultSeed)
    .option("--period-ms <number>", "time between two readings of a stream", periodNumber, 2000)
    .option("--in-flight <number>", "most readings that wait for the broker at a time", wholeNumber(1, 10_000), 100)
    .option("--quiet", "print nothing of what goes on")
    .addHelpText("after", more)
    .action(run);
}

async function run(options: Options): Promise<void> {
  const start = options.start ?? Date.now();
  if (options.speed > 1 && options.start === undefined) {
    throw new UsageError(
      `--speed ${options.speed} without --start would make readings from the future, which the service refuses. Add a --start in the past.`,
    );
  }
  const scenario = await scenarioOf(options.scenario);
  const say = options.quiet ? () => {} : (line: string) => console.log(line);
  const publisher = startPublisher({ ...options, scenario, start, plant: makePlant(options.seed), say });
  const signal = await Promise.race([
    once(process, "SIGTERM").then(() => "SIGTERM"),
    once(process, "SIGINT").then(() => "SIGINT"),
  ]);
  await publisher.stop();
  say(`${signal}: stopped; ${publisher.acknowledged} readings were acknowledged`);
}

async function scenarioOf(word: string): Promise<Scenario> {
  if (Object.hasOwn(builtInScenarios, word)) return builtInScenarios[word as keyof typeof builtInScenarios];
  let text: string;
  try {
    text = await readFile(word, "utf8");
  } catch (cause) {
    throw new ScenarioError(word, "", {
      got: `not to be read (${(cause as Error).message})`,
      expected: `one of ${Object.keys(builtInScenarios).join(", ")}, or a file`,
      todo: "Mend the name.",
      cause,
    });
  }
  return parseScenario(text, word);
}

function brokerUrl(text: string): string {
  if (URL.canParse(text) && /^(mqtts?|tcp|tls|wss?):$/.test(new URL(text).protocol)) return text;
  throw new UsageError(`--broker is "${text}", expected an address as mqtt://127.0.0.1:1883. Mend it.`);
}
