import { MqttClient } from "mqtt";
import { resultOf } from "../../core/messages/index.ts";
import type { Log } from "../log.ts";
import { type Connection, firstWaitMs, nextWaitMs } from "./connection.ts";
import type { Told } from "./engine.ts";
import { Outbox } from "./outbox.ts";
import type { Topics } from "./topics.ts";

const mostUnsentBytes = 8 * 1024 * 1024;

/** Publishes what the engine has put on record: results, alarms, and the retained status, with a last will that says the engine is gone. */
export class Outside {
  readonly #client: MqttClient;
  readonly #topics: Topics;
  /** what each stream's retained status said last */
  readonly #said = new Map<string, string>();

  readonly #alarms: Outbox;

  constructor({ url, dial, options }: Connection, topics: Topics, log: Log) {
    this.#topics = topics;
    const gone = JSON.stringify({ running: false });
    this.#client = new MqttClient(dial, {
      ...options,
      clean: true,
      // Results are of the moment: those of a broken link are not sent late.
      queueQoSZero: false,
      will: { topic: topics.engineStatus, payload: Buffer.from(gone), qos: 1, retain: true },
    });
    this.#alarms = new Outbox(this.#client, (count) =>
      log(`${count} alarm messages were not published: the broker was away too long; they are on record`, "warn"),
    );
    this.#client.on("connect", () => {
      this.#client.options.reconnectPeriod = firstWaitMs;
      this.#said.clear();
      this.#retain(topics.engineStatus, { running: true, since: new Date().toISOString() });
      this.#alarms.send();
    });
    this.#client.on("reconnect", () => {
      this.#client.options.reconnectPeriod = nextWaitMs(this.#client.options.reconnectPeriod ?? firstWaitMs);
    });
    this.#client.on("error", (error) => log(`publishing to ${url}: ${error.message}`, "warn"));
  }

  publish({ judged, now, events }: Told): void {
    if (this.#takesResults()) {
      for (const reading of judged) {
        this.#client.publish(this.#topics.result(reading.stream), JSON.stringify(resultOf(reading)), { qos: 0 });
      }
    }
    for (const event of events) {
      // What recorded history brought in calls nobody.
      if (event.stream === null || event.history || !event.kind.startsWith("alarm ")) continue;
      const { at, kind, says, by, key, alarm, setAside, cursor } = event;
      const message = { time: new Date(at).toISOString(), cursor, kind, says, by, key, alarm, setAside };
      this.#alarms.add(this.#topics.alarm(event.stream), JSON.stringify(message));
    }
    // A status is of the moment, too: while nobody can hear it, it is not queued, and the next change after the break says it anew.
    if (!this.#client.connected) return;
    for (const { stream, latest, alarms } of now) {
      const open = alarms.map(({ key, priority, state }) => ({ key, priority, state }));
      const status = { verdict: latest?.verdict ?? [], alarms: open };
      const text = JSON.stringify(status);
      if (this.#said.get(stream) === text) continue;
      this.#said.set(stream, text);
      this.#retain(this.#topics.status(stream), { ...status, time: latest && new Date(latest.time).toISOString() });
    }
  }

  /** A broker that is connected and reads nothing must not fill the memory: results are QoS 0, and leave out what nobody takes. */
  #takesResults(): boolean {
    return this.#client.connected && this.#client.stream.writableLength < mostUnsentBytes;
  }

  async close(): Promise<void> {
    if (this.#client.connected) {
      const topic = this.#topics.engineStatus;
      await this.#client.publishAsync(topic, JSON.stringify({ running: false }), { qos: 1, retain: true });
    }
    await this.#client.endAsync(true);
  }

  #retain(topic: string, message: object): void {
    this.#client.publish(topic, JSON.stringify(message), { qos: 1, retain: true });
  }
}
