import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, expect, test } from "vitest";
import { Inbox } from "../../server/broker/inbox.ts";
import { InboxSource } from "../../server/engine/inbox-source.ts";

let folder: string;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), "millrace-inbox-"));
});
afterEach(() => rmSync(folder, { recursive: true }));

const payload = Buffer.alloc(1000, 1);
const turn = () => new Promise((resolve) => setTimeout(resolve, 20));

test("a full inbox answers no publisher until the engine has taken some, and then all of them, in their order", async () => {
  const file = join(folder, "inbox.db");
  const inbox = new Inbox(file, () => {}, { mostBytes: 3000 });
  const answered: number[] = [];
  const keep = (i: number) => inbox.keep(`t/${i}`, payload, Date.now(), (error) => !error && answered.push(i));
  for (let i = 0; i < 3; i++) keep(i);
  await turn();
  for (let i = 3; i < 6; i++) keep(i);
  await turn();
  expect(answered).toEqual([0, 1, 2]);
  expect(inbox.state).toEqual({ bytes: 3000, held: 3 });

  const source = new InboxSource(file, (n) => inbox.drainedUpTo(n));
  const first = source.take(200)!;
  expect(first.messages.map(({ topic }) => topic)).toEqual(["t/0", "t/1", "t/2"]);
  first.acknowledge();
  await turn();
  expect(answered).toEqual([0, 1, 2, 3, 4, 5]);
  expect(source.take(200)!.messages.map(({ topic }) => topic)).toEqual(["t/3", "t/4", "t/5"]);
  expect(inbox.state).toEqual({ bytes: 3000, held: 0 });
  await source.close();
  inbox.close();

  // What is left there weighs again after a start.
  const again = new Inbox(file, () => {}, { mostBytes: 3000 });
  expect(again.state.bytes).toBe(3000);
  again.close();
});

test("large messages are taken few at a time", async () => {
  const file = join(folder, "inbox.db");
  const inbox = new Inbox(file, () => {});
  for (let i = 0; i < 10; i++) inbox.keep(`t/${i}`, Buffer.alloc(4 * 1024 * 1024), Date.now(), () => {});
  await turn();
  const source = new InboxSource(file, () => {});
  expect(source.take(200)!.messages.length).toBe(4);
  expect(source.waiting().count).toBe(10);
  await source.close();
  inbox.close();
});
