import { join } from "node:path";
import { Door } from "./broker/door.ts";
import { type EmbeddedBroker, startEmbeddedBroker } from "./broker/embedded-broker.ts";
import { ConfigError, isLoopback, type PlantConfig } from "./config/plant-config.ts";
import type { Told } from "./engine/engine.ts";
import { type EngineError, EngineThread } from "./engine/engine-thread.ts";
import { type Gateway, startGateway } from "./gateway/gateway.ts";
import { logOf } from "./log.ts";
import { PeopleStore } from "./people/people-store.ts";
import { PublisherStore } from "./people/publisher-store.ts";
import { lockDataFolder } from "./service-lock.ts";
import { sqliteReader } from "./store/sqlite/reader.ts";
import type { StoreReader } from "./store/store.ts";
import { version } from "./version.ts";

export interface Service {
  /** where the screens are */
  url: string;
  brokerUrl: string;
  engine: EngineThread;
  store: StoreReader;
  stop(): Promise<void>;
}

/**
 * Starts broker (where it is embedded), engine and gateway, in that order: what a publisher sends before the engine is up waits on disk.
 *
 * @param options.died the engine ended by itself: nothing is judged any more
 */
export async function startService(
  config: PlantConfig,
  options: { died: (error: EngineError) => void },
): Promise<Service> {
  const unlock = lockDataFolder(config.data);
  const closing: (() => Promise<void> | void)[] = [unlock];
  try {
    return await assemble(config, options, closing);
  } catch (error) {
    for (const close of closing.reverse()) await close();
    throw error;
  }
}

async function assemble(
  config: PlantConfig,
  { died }: { died: (error: EngineError) => void },
  closing: (() => Promise<void> | void)[],
): Promise<Service> {
  const recordFile = join(config.data, "record.db");
  const people = new PeopleStore(join(config.data, "people.db"));
  checkPeople(config, people);
  const inboxFile = join(config.data, "inbox.db");
  const { broker: brokerConfig, prefix } = config.mqtt;
  let broker: EmbeddedBroker | undefined;
  let engine: EngineThread | undefined;
  let brokerUrl: string;
  let door: Door | undefined;
  if ("embedded" in brokerConfig) {
    const { host } = brokerConfig.embedded;
    const publishers = new PublisherStore(join(config.data, "people.db"));
    closing.push(() => publishers.close());
    door = new Door(publishers);
    checkPublishers(host, door);
    const isReading = (topic: string) => topic.startsWith(`${prefix}/`) && /\/(reading|state|lab)$/.test(topic);
    broker = await startEmbeddedBroker({
      ...brokerConfig.embedded,
      inboxFile,
      isReading,
      root: `${prefix}/${config.site}/`,
      door,
      onReading: () => engine?.inboxFilled(),
      log: logOf("broker"),
    });
    closing.push(() => broker?.close());
    brokerUrl = broker.ownUrl;
  } else {
    brokerUrl = brokerConfig.url;
  }

  let gateway: Gateway | undefined;
  const early: Told[] = [];
  const started = await new Promise<EngineThread>((resolve, reject) => {
    const thread = new EngineThread(
      { config, recordFile, brokerUrl, ...(broker ? { inboxFile } : {}), ...(door ? { brokerSecret: door.own } : {}) },
      {
        ready(told) {
          early.push(told);
          resolve(thread);
        },
        told: (told) => (gateway ? gateway.live.told(told) : early.push(told)),
        health: (health) => gateway?.live.health(health),
        drained: (n) => broker?.drainedUpTo(n),
        account: (account) => gateway?.figures.take(account),
        log: logOf("engine"),
        died(error) {
          reject(error);
          if (engine) died(error);
        },
      },
    );
  });
  engine = started;
  closing.push(() => started.stop());
  engine.inboxFilled(); // what came while it was getting ready

  const store = sqliteReader(recordFile);
  gateway = await startGateway({
    config,
    store,
    engine,
    people,
    version,
    files: { record: recordFile, inbox: inboxFile },
    broker: broker?.state,
  });
  for (const told of early) gateway.live.told(told);
  const opened = gateway;
  closing.push(() => opened.close());
  return {
    url: gateway.url,
    brokerUrl,
    engine,
    store,
    async stop() {
      for (const close of closing.reverse()) await close();
    },
  };
}

/** Reached from other machines it must know who asks. @throws ConfigError */
function checkPeople({ http, demo }: PlantConfig, people: PeopleStore): void {
  if (isLoopback(http.host) || (!people.isEmpty() && !demo)) return;
  throw new ConfigError("http.host", {
    got: `"${http.host}", which other machines reach, ${demo ? "for an invented plant" : "with nobody who could sign in"}`,
    expected: demo ? "an address of this machine only" : "at least one person",
    todo: demo ? "Listen on 127.0.0.1." : "Add one: millrace user add NAME --role administrator --config plant.json",
  });
}

/** Asks for credentials, or is reached from this machine only and says so. @throws ConfigError */
function checkPublishers(host: string, door: Door): void {
  if (door.asks) return;
  const todo = "Add one: millrace publisher add NAME --streams ID --config plant.json";
  if (!isLoopback(host)) {
    const got = `"${host}", which other machines reach, with no publisher who could sign in`;
    throw new ConfigError("mqtt.broker.embedded.host", { got, expected: "at least one publisher", todo });
  }
  logOf("broker")(`asks for no credentials: every program on this machine may publish readings. ${todo}`);
}
