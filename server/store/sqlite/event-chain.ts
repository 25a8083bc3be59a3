import { createHash } from "node:crypto";
import type Database from "better-sqlite3";

/** What stands before the first event. */
export const chainStart = Buffer.alloc(32);

/** The hash of one event: SHA-256 over the hash of the one before and its own text. Changing any event changes all that follow. */
export function chainHash(before: Buffer, json: string): Buffer {
  return createHash("sha256").update(before).update(json).digest();
}

/** A record's third form: events carry their hash, and nobody changes or deletes them any more. */
export function chainEvents(db: Database.Database): void {
  db.exec("ALTER TABLE event ADD COLUMN hash BLOB");
  const set = db.prepare("UPDATE event SET hash = ? WHERE cursor = ?");
  let hash: Buffer = chainStart;
  for (const { cursor, json } of db
    .prepare<[], { cursor: number; json: string }>("SELECT cursor, json FROM event ORDER BY cursor")
    .all()) {
    hash = chainHash(hash, json);
    set.run(hash, cursor);
  }
  db.exec(`
    CREATE TRIGGER event_stays BEFORE UPDATE ON event BEGIN SELECT raise(ABORT, 'events are never changed'); END;
    CREATE TRIGGER event_is_kept BEFORE DELETE ON event BEGIN SELECT raise(ABORT, 'events are never deleted'); END;
  `);
}

export interface ChainOutcome {
  events: number;
  /** of the last event, to be kept elsewhere: with it a shortened record is found out as well */
  head: string;
  /** the first event that does not fit */
  broken?: { cursor: number; why: string };
}

/** Walks the whole chain. */
export function verifyChain(db: Database.Database): ChainOutcome {
  let hash: Buffer = chainStart;
  let events = 0;
  const rows = db.prepare<[], { cursor: number; json: string; hash: Buffer | null }>(
    "SELECT cursor, json, hash FROM event ORDER BY cursor",
  );
  for (const row of rows.iterate()) {
    const fail = (why: string): ChainOutcome => ({
      events,
      head: hash.toString("hex"),
      broken: { cursor: row.cursor, why },
    });
    if (row.cursor !== events + 1)
      return fail(`its number is ${row.cursor}, expected ${events + 1}: events are missing before it`);
    const expected = chainHash(hash, row.json);
    if (!row.hash?.equals(expected))
      return fail("its hash does not fit its text and the event before it: one of them was changed");
    hash = expected;
    events++;
  }
  return { events, head: hash.toString("hex") };
}
