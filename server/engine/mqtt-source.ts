import { MqttClient } from "mqtt";
import type { Log } from "../log.ts";
import { type Connection, firstWaitMs, nextWaitMs } from "./connection.ts";
import { PubackGate } from "./puback-gate.ts";
import type { Message, MessageBatch, Source } from "./source.ts";

interface Held extends Message {
  /** the connection that it came by; undefined for QoS 0, which has no PUBACK */
  gate: PubackGate | undefined;
}

/**
 * Readings by a QoS 1 subscription with a persistent session at an external broker. A message's PUBACK is withheld until the engine has it on
 * record (MQTT 3.1.1 §4.3.2, MQTT 5 §4.3.2). The client library hands over a message only when it has written the PUBACK of the one before,
 * so it may write them at once, and a gate under it holds them back: as many are in flight as the broker allows, and one commit takes them all.
 */
export class MqttSource implements Source {
  readonly #client: MqttClient;
  #held: Held[] = [];

  constructor(options: { connection: Connection; topics: string[]; wake: () => void; log: Log }) {
    const { connection, topics, wake, log } = options;
    const { url, dial, inFlight } = connection;
    let gate: PubackGate | undefined;
    const link = () => {
      const socket = dial();
      socket.on("error", (error) => log(`broker ${url}: ${error.message}`, "warn"));
      gate = new PubackGate(socket, inFlight);
      return gate;
    };
    // clean: false keeps the session, so that what comes while the engine is down waits at the broker.
    this.#client = new MqttClient(link, { ...connection.options, clean: false, resubscribe: true });
    this.#client.handleMessage = ({ topic, payload, qos }, done) => {
      const bytes = typeof payload === "string" ? Buffer.from(payload) : payload;
      this.#held.push({ topic, payload: bytes, receivedAt: Date.now(), gate: qos === 0 ? undefined : gate });
      done();
      wake();
    };
    this.#client.on("connect", ({ sessionPresent }) => {
      this.#client.options.reconnectPeriod = firstWaitMs;
      log(sessionPresent ? "broker reached, session resumed" : "broker reached, new session");
      this.#client.subscribe(topics, { qos: 1 }, (error, granted) => {
        const refused = granted?.some(({ qos }) => qos !== 1) ?? false;
        const why = error ? `: ${error.message}` : "";
        if (error || refused) log(`the broker does not grant ${topics.join(", ")} at QoS 1${why}`, "error");
      });
    });
    this.#client.on("close", () => {
      // What was not acknowledged comes again in the session: holding on to it would make it a repeat.
      this.#held = [];
    });
    this.#client.on("error", (error) => log(`broker ${url}: ${error.message}`, "warn"));
    this.#client.on("offline", () => log(`broker ${url} is not reached; going on trying`, "warn"));
    this.#client.on("reconnect", () => {
      this.#client.options.reconnectPeriod = nextWaitMs(this.#client.options.reconnectPeriod ?? firstWaitMs);
    });
  }

  take(most: number): MessageBatch | undefined {
    const messages = this.#held.slice(0, most);
    if (messages.length === 0) return undefined;
    return {
      messages,
      acknowledge: () => {
        if (this.#held[0] === messages[0]) this.#held.splice(0, messages.length);
        const counts = new Map<PubackGate, number>();
        for (const { gate } of messages) if (gate) counts.set(gate, (counts.get(gate) ?? 0) + 1);
        for (const [gate, count] of counts) gate.release(count);
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
