import type { MqttClient } from "mqtt";

interface Post {
  topic: string;
  text: string;
}

/** What waits for a broker that is away: a day and more of a busy plant's alarms, some 10 MB. */
const mostWaiting = 10_000;
/** Sent and not yet acknowledged, at most: the client library keeps these in memory and sends them again after a break. */
const mostSent = 100;

/**
 * Messages for others at QoS 1, in their order, bounded: where more wait than it holds the oldest go, and it says how many. (They are on
 * record; who missed them asks for the events after the last cursor that came.)
 */
export class Outbox {
  readonly #client: Pick<MqttClient, "connected" | "publish">;
  readonly #lost: (count: number) => void;
  #waiting: Post[] = [];
  #sent = 0;
  #left = 0;

  /** `lost` hears how many were given up, once there is somebody to hear the others. */
  constructor(client: Pick<MqttClient, "connected" | "publish">, lost: (count: number) => void) {
    this.#client = client;
    this.#lost = lost;
  }

  add(topic: string, text: string): void {
    this.#waiting.push({ topic, text });
    // In portions: an array gives up its first one by one only slowly.
    if (this.#waiting.length >= 2 * mostWaiting) this.#leave(this.#waiting.length - mostWaiting);
    this.send();
  }

  /** Sends what may be sent now; to be called when the broker is reached again. */
  send(): void {
    if (!this.#client.connected) return;
    if (this.#waiting.length > mostWaiting + mostSent) this.#leave(this.#waiting.length - mostWaiting);
    if (this.#left > 0) this.#lost(this.#left);
    this.#left = 0;
    const room = Math.max(0, mostSent - this.#sent);
    for (const { topic, text } of this.#waiting.splice(0, room)) {
      this.#sent++;
      this.#client.publish(topic, text, { qos: 1 }, () => {
        this.#sent--;
        this.send();
      });
    }
  }

  #leave(count: number): void {
    this.#waiting = this.#waiting.slice(count);
    this.#left += count;
  }
}
