import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import Database from "better-sqlite3";
import { afterEach, beforeEach, expect, test } from "vitest";
import { verifyChain } from "../../server/store/sqlite/event-chain.ts";
import { sqliteWriter } from "../../server/store/sqlite/writer.ts";
import type { Changes } from "../../server/store/store.ts";

let folder: string;
let file: string;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), "millrace-chain-"));
  file = join(folder, "record.db");
});
afterEach(() => rmSync(folder, { recursive: true }));

function changes(...cursors: number[]): Changes {
  const events = cursors.map((cursor) => ({ cursor, at: cursor, stream: null, kind: "test", says: `event ${cursor}` }));
  return { readings: [], refusals: [], events, excursions: [], states: new Map() };
}

/** Two runs of a service, with seven events in all. */
function write(): void {
  for (const cursors of [[1, 2, 3], [4], [5, 6, 7]]) {
    const store = sqliteWriter(file);
    store.commit(changes(...cursors));
    store.close();
  }
}

/** Somebody with a tool of their own, who takes the locks off first. */
function tamper(sql: string): ReturnType<typeof verifyChain> {
  const db = new Database(file);
  db.exec("DROP TRIGGER event_stays; DROP TRIGGER event_is_kept");
  db.exec(sql);
  const outcome = verifyChain(db);
  db.close();
  return outcome;
}

test("the chain goes on over restarts", () => {
  write();
  const db = new Database(file, { readonly: true });
  expect(verifyChain(db)).toEqual({ events: 7, head: expect.stringMatching(/^[0-9a-f]{64}$/) });
  db.close();
});

test("an event cannot be changed or deleted by the way that the record offers", () => {
  write();
  const db = new Database(file);
  expect(() => db.exec("UPDATE event SET json = '{}' WHERE cursor = 3")).toThrow("events are never changed");
  expect(() => db.exec("DELETE FROM event WHERE cursor = 3")).toThrow("events are never deleted");
  db.close();
});

test.each<[string, string, number, RegExp]>([
  [
    "a changed event",
    "UPDATE event SET json = replace(json, 'event 3', 'event x') WHERE cursor = 3",
    3,
    /one of them was changed/,
  ],
  ["a missing event", "DELETE FROM event WHERE cursor = 5", 6, /its number is 6, expected 5: events are missing/],
  [
    "two that changed places",
    "UPDATE event SET json = (SELECT json FROM event WHERE cursor = 2) WHERE cursor = 1",
    1,
    /changed/,
  ],
  ["an event without its hash", "UPDATE event SET hash = NULL WHERE cursor = 7", 7, /changed/],
])("%s is found, and the first that does not fit is named", (_, sql, cursor, why) => {
  write();
  const { broken, events } = tamper(sql);
  expect(broken?.cursor).toBe(cursor);
  expect(broken?.why).toMatch(why);
  expect(events).toBe(cursor === 6 ? 4 : cursor - 1);
});

test("a commit that fails leaves the chain where it was", () => {
  write();
  const store = sqliteWriter(file);
  expect(() => store.commit(changes(8, 8))).toThrow();
  store.commit(changes(8, 9));
  store.close();
  const db = new Database(file, { readonly: true });
  expect(verifyChain(db)).toMatchObject({ events: 9 });
  db.close();
});
