import { connect, type IClientOptions, type MqttClient } from "mqtt";
import type { Message, MessageBatch, Source } from "./source.ts";

interface Held extends Message {
  acknowledge: () => void;
}

/**
 * Readings by a QoS 1 subscription with a persistent session at an external broker. The PUBACK of a message is withheld until the engine has
 * it on record (MQTT 3.1.1 §4.3.2); the client hands over the next one only then, so one message is in flight at a time.
 */
export class MqttSource implements Source {
  readonly #client: MqttClient;
  #held: Held[] = [];

  constructor(options: {
    url: string;
    connection: IClientOptions;
    topics: string[];
    wake: () => void;
    log: (says: string) => void;
  }) {
    const { url, connection, topics, wake, log } = options;
    // clean: false keeps the session, so that what comes while the engine is down waits at the broker.
    this.#client = connect(url, { ...connection, clean: false, reconnectPeriod: 1000, resubscribe: true });
    this.#client.handleMessage = (packet, done) => {
      const payload = typeof packet.payload === "string" ? Buffer.from(packet.payload) : packet.payload;
      this.#held.push({ topic: packet.topic, payload, receivedAt: Date.now(), acknowledge: () => done() });
      wake();
    };
    this.#client.on("connect", ({ sessionPresent }) => {
      log(sessionPresent ? "broker reached, session resumed" : "broker reached, new session");
      this.#client.subscribe(topics, { qos: 1 }, (error, granted) => {
        const refused = granted?.some(({ qos }) => qos !== 1) ?? false;
        if (error || refused)
          log(`the broker does not grant ${topics.join(" and ")} at QoS 1${error ? `: ${error.message}` : ""}`);
      });
    });
    this.#client.on("close", () => {
      // What was not acknowledged comes again in the session: holding on to it would make it a repeat.
      this.#held = [];
    });
    this.#client.on("error", (error) => log(`broker ${url}: ${error.message}`));
    this.#client.on("offline", () => log(`broker ${url} is not reached; trying again every second`));
  }

  take(most: number): MessageBatch | undefined {
    const messages = this.#held.slice(0, most);
    if (messages.length === 0) return undefined;
    return {
      messages,
      acknowledge: () => {
        this.#held = this.#held.slice(messages.length);
        for (const { acknowledge } of messages) acknowledge();
      },
    };
  }

  waiting(): { count: number; oldest: number | undefined } {
    return { count: this.#held.length, oldest: this.#held[0]?.receivedAt };
  }

  connected(): boolean {
    return this.#client.connected;
  }

  async close(): Promise<void> {
    await this.#client.endAsync();
  }
}
