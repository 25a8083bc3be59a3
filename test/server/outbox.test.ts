import { expect, test } from "vitest";
import { Outbox } from "../../server/engine/outbox.ts";

/** Stands for the broker's end of the line: what came over it, and acknowledgements when the test says so. */
function line() {
  const came: string[] = [];
  const unacknowledged: (() => void)[] = [];
  const client = {
    connected: false,
    publish(_topic: string, text: string, _options: object, done: () => void) {
      came.push(text);
      unacknowledged.push(done);
      return client;
    },
  };
  return {
    came,
    client,
    acknowledgeAll() {
      while (unacknowledged.length > 0) unacknowledged.shift()!();
    },
  };
}

test("what was said while the broker was away goes out in its order, at most a hundred unacknowledged at a time", () => {
  const { came, client, acknowledgeAll } = line();
  const lost: number[] = [];
  const outbox = new Outbox(client as never, (count) => lost.push(count));
  for (let i = 0; i < 350; i++) outbox.add("t", String(i));
  expect(came).toEqual([]);
  client.connected = true;
  outbox.send();
  expect(came.length).toBe(100);
  acknowledgeAll();
  expect(came).toEqual(Array.from({ length: 350 }, (_, i) => String(i)));
  expect(lost).toEqual([]);
});

test("a broker that stays away costs bounded memory: the newest 10 000 stay, and it is said how many went", () => {
  const { came, client, acknowledgeAll } = line();
  const lost: number[] = [];
  const outbox = new Outbox(client as never, (count) => lost.push(count));
  for (let i = 0; i < 45_000; i++) outbox.add("t", String(i));
  client.connected = true;
  outbox.send();
  acknowledgeAll();
  expect(lost).toEqual([35_000]);
  expect(came).toEqual(Array.from({ length: 10_000 }, (_, i) => String(35_000 + i)));
});
