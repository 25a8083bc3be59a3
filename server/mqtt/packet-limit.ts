import type { Socket } from "node:net";
import { PacketFrames } from "./packet-frames.ts";

/**
 * Closes a connection as soon as one of its packets says that it is longer than `mostBytes()`, before its body has come: the parser above
 * keeps a packet in memory until it is whole, and MQTT lets a packet say 256 MB. MQTT 3.1.1 has no words for "too large", so closing is the answer.
 *
 * To be called after the parser has taken hold of the socket by "readable": then "data" is told of each chunk just before the parser gets
 * it, and does not set the socket flowing.
 */
export function limitPackets(
  socket: Socket,
  { mostBytes, tooLarge }: { mostBytes: () => number; tooLarge: (bytes: number) => void },
): void {
  const frames = new PacketFrames();
  socket.on("data", (chunk: Buffer) => {
    frames.read(chunk, {
      header(_type, length) {
        if (length <= mostBytes() || socket.destroyed) return;
        tooLarge(length);
        socket.destroy();
      },
    });
  });
}
