import { Duplex } from "node:stream";
import { PacketFrames, puback } from "../mqtt/packet-frames.ts";

/**
 * The engine's connection to an external broker, with a gate for its PUBACKs: all else that the MQTT client sends goes straight on, a PUBACK
 * waits until `release` lets it. So the client may take many messages while none of them is acknowledged before it is on record, and one
 * commit holds them all. PUBACKs go out in the order in which they came [MQTT-4.6.0-2]. While more than `most` wait, nothing is read from
 * the broker: its back-pressure, where it has no receive maximum, is TCP's.
 */
export class PubackGate extends Duplex {
  readonly #socket: Duplex;
  readonly #most: number;
  readonly #frames = new PacketFrames();
  #waiting: Buffer[] = [];
  /** of a PUBACK whose last byte has not been written yet */
  #begun: Buffer[] = [];
  #allowed = 0;
  #paused = false;

  constructor(socket: Duplex, most: number) {
    super();
    this.#socket = socket;
    this.#most = most;
    socket.on("data", (chunk: Buffer) => {
      if (!this.push(chunk)) socket.pause();
    });
    socket.on("end", () => this.push(null));
    socket.on("error", (error) => this.destroy(error));
    socket.on("close", () => this.destroy());
  }

  /** The next `count` PUBACKs may go: those that wait, and then those that the client is about to write. */
  release(count: number): void {
    this.#allowed += count;
    this.#openGate();
  }

  override _read(): void {
    if (!this.#paused) this.#socket.resume();
  }

  override _write(chunk: Buffer, _encoding: string, done: (error?: Error | null) => void): void {
    const through: Buffer[] = [];
    this.#frames.read(chunk, {
      part: (type, from, to, ends) => {
        const bytes = chunk.subarray(from, to);
        if (type !== puback) {
          through.push(bytes);
          return;
        }
        this.#begun.push(bytes);
        if (!ends) return;
        this.#waiting.push(Buffer.concat(this.#begun));
        this.#begun = [];
      },
    });
    if (through.length > 0) this.#socket.write(through.length === 1 ? through[0] : Buffer.concat(through));
    this.#openGate();
    if (this.#waiting.length > this.#most && !this.#paused) {
      this.#paused = true;
      this.#socket.pause();
    }
    if (this.#socket.writableNeedDrain) this.#socket.once("drain", done);
    else done();
  }

  override _final(done: (error?: Error | null) => void): void {
    this.#socket.end(done);
  }

  override _destroy(error: Error | null, done: (error?: Error | null) => void): void {
    this.#socket.destroy();
    done(error);
  }

  #openGate(): void {
    const count = Math.min(this.#allowed, this.#waiting.length);
    if (count > 0) {
      this.#socket.write(Buffer.concat(this.#waiting.splice(0, count)));
      this.#allowed -= count;
    }
    if (this.#paused && this.#waiting.length <= this.#most / 2) {
      this.#paused = false;
      this.#socket.resume();
    }
  }
}
