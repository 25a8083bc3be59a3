import type Database from "better-sqlite3";
import type { EntryOf, HandoverEntry, RecordedEvent } from "../../../core/messages/index.ts";
import type { FrozenRecord, HandoverBook, HandoverReader } from "../handover-store.ts";

/*
 * Entries are events of the chain, kept a second time where a shift finds them; signed records stand under their hash, which the chain holds
 * with the signature. Neither is ever changed or deleted. `said` is the index of all that people said, under the number of its event.
 */
const schema = `
CREATE TABLE handover_entry (
  number INTEGER PRIMARY KEY, shift INTEGER NOT NULL, at INTEGER NOT NULL, kind TEXT NOT NULL, refers INTEGER, json TEXT NOT NULL) STRICT;
CREATE INDEX handover_entry_by_shift ON handover_entry (shift, number);
CREATE INDEX handover_entry_by_kind ON handover_entry (kind, number);
CREATE INDEX handover_entry_by_refers ON handover_entry (refers) WHERE refers IS NOT NULL;
CREATE TABLE shift_record (hash TEXT NOT NULL, shift INTEGER NOT NULL, number INTEGER PRIMARY KEY, until INTEGER NOT NULL, json TEXT NOT NULL) STRICT;
CREATE INDEX shift_record_by_hash ON shift_record (hash);
CREATE INDEX shift_record_by_shift ON shift_record (shift, number);
CREATE TRIGGER handover_entry_stays BEFORE UPDATE ON handover_entry BEGIN SELECT raise(ABORT, 'entries are never changed'); END;
CREATE TRIGGER handover_entry_is_kept BEFORE DELETE ON handover_entry BEGIN SELECT raise(ABORT, 'entries are never deleted'); END;
CREATE TRIGGER shift_record_stays BEFORE UPDATE ON shift_record BEGIN SELECT raise(ABORT, 'signed records are never changed'); END;
CREATE TRIGGER shift_record_is_kept BEFORE DELETE ON shift_record BEGIN SELECT raise(ABORT, 'signed records are never deleted'); END;
CREATE INDEX event_by_time ON event (at);
CREATE INDEX event_by_kind ON event (kind, at);
CREATE VIRTUAL TABLE said USING fts5 (says, content = '', tokenize = 'unicode61 remove_diacritics 2');
INSERT INTO said (rowid, says) SELECT cursor, json_extract(json, '$.says') FROM event WHERE json_extract(json, '$.by') IS NOT NULL;
CREATE TRIGGER event_is_said AFTER INSERT ON event WHEN json_extract(new.json, '$.by') IS NOT NULL
  BEGIN INSERT INTO said (rowid, says) VALUES (new.cursor, json_extract(new.json, '$.says')); END;
`;

/** A record's form with the records of shifts. */
export function addHandover(db: Database.Database): void {
  db.exec(schema);
}

/** The writer's part; to be called within its transaction. */
export function handoverWriter(db: Database.Database) {
  const entry = db.prepare("INSERT INTO handover_entry VALUES (?, ?, ?, ?, ?, ?)");
  const record = db.prepare("INSERT INTO shift_record VALUES (?, ?, ?, ?, ?)");
  return {
    add(added: HandoverEntry): void {
      const { number, shift, at, kind } = added;
      entry.run(number, shift, at, kind, "refers" in added ? added.refers : null, JSON.stringify(added));
    },
    /** @param number of the signature that froze it */
    freeze({ hash, shift, to, json }: FrozenRecord, number: number): void {
      record.run(hash, shift, number, to, json);
    },
  };
}

export function handoverBook(db: Database.Database): HandoverBook {
  const sql = {
    entries: db.prepare<[number], string>("SELECT json FROM handover_entry WHERE shift = ? ORDER BY number").pluck(),
    entry: db.prepare<[number], string>("SELECT json FROM handover_entry WHERE number = ?").pluck(),
    closing: db
      .prepare<[number], string>("SELECT json FROM handover_entry WHERE refers = ? AND kind = 'action closed' LIMIT 1")
      .pluck(),
    lastAt: db.prepare<[], number>("SELECT at FROM handover_entry ORDER BY number DESC LIMIT 1").pluck(),
  };
  return {
    entries: (shift) => sql.entries.all(shift).map(parsed<HandoverEntry>),
    entry: (number) => optional<HandoverEntry>(sql.entry.get(number)),
    closing: (action) => optional<EntryOf<"action closed">>(sql.closing.get(action)),
    lastAt: () => sql.lastAt.get() ?? 0,
  };
}

export function handoverReader(db: Database.Database): HandoverReader {
  const sql = {
    actions: db.prepare<{ shift: number; from: number; to: number }, { action: string; closed: string | null }>(
      `SELECT action.json AS action, closed.json AS closed FROM handover_entry AS action
       LEFT JOIN handover_entry AS closed ON closed.refers = action.number AND closed.kind = 'action closed'
       WHERE action.kind = 'action' AND (action.shift = @shift OR action.at < @to) AND (closed.at IS NULL OR closed.at >= @from) ORDER BY action.number`,
    ),
    frozen: db.prepare<[string], FrozenRecord>(
      'SELECT hash, shift, until AS "to", json FROM shift_record WHERE hash = ? LIMIT 1',
    ),
    frozenTo: db
      .prepare<[number], number>("SELECT until FROM shift_record WHERE shift = ? ORDER BY number DESC LIMIT 1")
      .pluck(),
    signatures: db
      .prepare<[number, number], string>(
        "SELECT json FROM handover_entry WHERE kind = 'signature' AND shift >= ? AND shift < ? ORDER BY number",
      )
      .pluck(),
    said: db
      .prepare<[string, number], string>(
        "SELECT event.json FROM said JOIN event ON event.cursor = said.rowid WHERE said MATCH ? ORDER BY said.rowid DESC LIMIT ?",
      )
      .pluck(),
    saidCount: db.prepare<[string], number>("SELECT count(*) FROM said WHERE said MATCH ?").pluck(),
  };
  return {
    ...handoverBook(db),
    actions: (of) =>
      sql.actions.all(of).map(({ action, closed }) => ({
        action: parsed<EntryOf<"action">>(action),
        closed: optional<EntryOf<"action closed">>(closed),
      })),
    frozen: (hash) => sql.frozen.get(hash),
    frozenTo: (shift) => sql.frozenTo.get(shift),
    signatures: (from, to) => sql.signatures.all(from, to).map(parsed<EntryOf<"signature">>),
    said(words, limit) {
      const query = matchAll(words);
      if (query === "") return { events: [], count: 0 };
      return { events: sql.said.all(query, limit).map(parsed<RecordedEvent>), count: sql.saidCount.get(query)! };
    },
  };
}

function parsed<T>(json: string): T {
  return JSON.parse(json) as T;
}

function optional<T>(json: string | null | undefined): T | undefined {
  return json === null || json === undefined ? undefined : parsed<T>(json);
}

/** Every word must be there, or one that begins with it. Quoted, so that a person's words are never operators of the index. */
function matchAll(words: string): string {
  return words
    .split(/\s+/)
    .map((word) => word.replaceAll('"', ""))
    .filter((word) => /[\p{L}\p{N}]/u.test(word))
    .map((word) => `"${word}"*`)
    .join(" ");
}
