import { Duplex } from "node:stream";
import { expect, test } from "vitest";
import { PubackGate } from "../../server/engine/puback-gate.ts";

/** A link whose far end is here: what was written to it, and how to let something arrive. */
function link() {
  const written: Buffer[] = [];
  const socket = new Duplex({
    read() {},
    write(chunk, _encoding, done) {
      written.push(chunk);
      done();
    },
  });
  return { socket, text: () => Buffer.concat(written).toString("hex") };
}
// MQTT 3.1.1 §3.4.1, §3.12.1 and §3.8.1: the bytes as they stand there; a length over 127 takes two (§2.2.3).
const ack = (messageId: number) => Buffer.from([0x40, 2, messageId >> 8, messageId & 0xff]);
const ping = Buffer.from([0xc0, 0]);
const subscribe = Buffer.concat([
  Buffer.from([0x82, 0xb1, 0x02, 0, 9, 1, 44]),
  Buffer.alloc(300, "t"),
  Buffer.from([1]),
]);
const hex = (...packets: Buffer[]) => Buffer.concat(packets).toString("hex");

test.each([1, 3, 1000])(
  "PUBACKs wait for their release, in order, all else goes straight on; written %i bytes at a time",
  (size) => {
    const { socket, text } = link();
    const gate = new PubackGate(socket, 100);
    const bytes = Buffer.concat([subscribe, ack(1), ping, ack(2), ack(300), ping]);
    for (let at = 0; at < bytes.length; at += size) gate.write(bytes.subarray(at, at + size));
    expect(text()).toBe(hex(subscribe, ping, ping));
    gate.release(2);
    expect(text()).toBe(hex(subscribe, ping, ping, ack(1), ack(2)));
    gate.release(2); // one that waits, and one that is yet to be written
    expect(text()).toBe(hex(subscribe, ping, ping, ack(1), ack(2), ack(300)));
    gate.write(ack(4));
    gate.write(ack(5));
    expect(text()).toBe(hex(subscribe, ping, ping, ack(1), ack(2), ack(300), ack(4)));
  },
);

test("while too many PUBACKs wait nothing more is read from the broker", () => {
  const { socket } = link();
  const gate = new PubackGate(socket, 2);
  const heard: string[] = [];
  gate.on("data", (chunk) => heard.push(String(chunk)));
  for (const id of [1, 2]) gate.write(ack(id));
  expect(socket.isPaused()).toBe(false);
  gate.write(ack(3));
  expect(socket.isPaused()).toBe(true);
  gate.release(1);
  expect(socket.isPaused()).toBe(true);
  gate.release(1);
  expect(socket.isPaused()).toBe(false);
});
