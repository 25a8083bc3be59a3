import { parentPort, workerData } from "node:worker_threads";
import { MillraceError } from "../../core/errors.ts";
import { beatEveryMs } from "../../core/messages/index.ts";
import type { Log } from "../log.ts";
import { sqliteWriter } from "../store/sqlite/writer.ts";
import { connectionOf } from "./connection.ts";
import { Engine } from "./engine.ts";
import { InboxSource } from "./inbox-source.ts";
import { Meter } from "./meter.ts";
import { MqttSource } from "./mqtt-source.ts";
import { Outside } from "./outside.ts";
import type { EngineSettings, FromEngine, ToEngine } from "./protocol.ts";
import { retireOldSpectra } from "./retention.ts";
import { readyStreams } from "./streams.ts";
import { topicsOf } from "./topics.ts";

const port = parentPort!;
const settings = workerData as EngineSettings;
const say = (message: FromEngine) => port.postMessage(message);
const log: Log = (says, level) => say({ kind: "log", says, level });

function run(): void {
  const { config, recordFile, inboxFile } = settings;
  const topics = topicsOf(config.mqtt.prefix, config.site);
  const meter = new Meter(sqliteWriter(recordFile));
  const { store } = meter;
  const streams = readyStreams(config.streams, store, Date.now());
  const outside = new Outside(connectionOf(config, settings, "results"), topics, log);
  let ready = false;
  const engine = new Engine({
    store,
    topics,
    streams,
    approval: config.limits?.approval === "another person",
    checks: (config.checks ?? []).map(({ key }) => key),
    log,
    tell(told) {
      say({ kind: ready ? "told" : "ready", told });
      ready = true;
      outside.publish(told);
    },
  });
  const source = inboxFile
    ? new InboxSource(inboxFile, (n) => say({ kind: "drained", n }))
    : new MqttSource({
        connection: connectionOf(config, settings, "readings"),
        topics: [topics.readings, topics.states, topics.labs],
        wake: () => engine.wake(),
        log,
      });
  engine.start(source);
  const stopRetiring = config.retention
    ? retireOldSpectra({
        store,
        streams: config.streams.map(({ id }) => id),
        days: config.retention.spectraDays,
        isIdle: () => engine.health().waiting === 0,
        trouble: (says) => log(says, "warn"),
      })
    : () => {};
  const beat = setInterval(() => {
    say({ kind: "health", health: engine.health() });
    say({ kind: "account", account: meter.account() });
  }, beatEveryMs);
  port.on("message", (message: ToEngine) => void answer(engine, message));

  async function answer(engine: Engine, message: ToEngine): Promise<void> {
    switch (message.kind) {
      case "inbox":
        engine.wake();
        return;
      case "stop":
        clearInterval(beat);
        stopRetiring();
        await engine.stop();
        await outside.close();
        say({ kind: "stopped" });
        port.close();
        return;
      default:
        try {
          say({ kind: "reply", id: message.id, outcome: await outcomeOf(engine, message) });
        } catch (error) {
          say({ kind: "reply", id: message.id, outcome: { failed: (error as Error).message } });
        }
    }
  }
}

type Asked = Exclude<ToEngine, { kind: "inbox" | "stop" }>;
async function outcomeOf(engine: Engine, message: Asked) {
  switch (message.kind) {
    case "command":
      return engine.command(message.command);
    case "open load":
      engine.openLoad(message.stream, message.periodMs);
      return { recorded: 0, repeated: 0, refused: 0 };
    case "load":
      return engine.load(message.stream, message.portion, message.share);
    case "close load":
      return engine.closeLoad(message.stream);
    default:
      return message satisfies never;
  }
}

try {
  run();
} catch (error) {
  // Something that a person must mend has its sentence; anything else is a fault of ours and keeps its trace.
  say({ kind: "failed", says: error instanceof MillraceError ? error.message : String((error as Error).stack) });
  port.close();
}
