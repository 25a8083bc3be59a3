import { existsSync, mkdirSync, statSync } from "node:fs";
import { dirname } from "node:path";
import Database from "better-sqlite3";
import { MillraceError, type Mismatch, mismatchSentence } from "../../../core/errors.ts";
import { chainEvents } from "./event-chain.ts";
import { addHandover } from "./handover.ts";
import { laboratorySchema } from "./laboratory.ts";
import { addRetirement } from "./retirement.ts";
import { rollUpAll, rollupSchema } from "./rollup.ts";
import { whatIsDamaged } from "./soundness.ts";

export class StoreError extends MillraceError {
  readonly code = "store";
  constructor(where: string, mismatch: Mismatch) {
    super(mismatchSentence(where, mismatch), { cause: mismatch.cause });
  }
}

/** What brings a record from one form to the next; a new record goes through all of them. The last form is the present one. */
const steps: readonly ((db: Database.Database) => void)[] = [
  (db) => db.exec(readingsAndEvents),
  (db) => {
    db.exec(rollupSchema);
    rollUpAll(db);
  },
  chainEvents,
  addRetirement,
  // Roll-ups keep the readings that were inside apart: those of the form before are made anew.
  (db) => {
    db.exec("DELETE FROM rollup");
    rollUpAll(db);
  },
  (db) => db.exec(forRehearsal),
  addHandover,
  (db) => db.exec(laboratorySchema),
  (db) => db.exec(keptLimits),
];

/** How long a commit waits for another program that holds the record: the engine's thread stands still meanwhile, and must go on reporting. */
const busyMs = 1000;

/** A record up to this size is looked through as a whole at every start: less than a second. A larger one is by every backup. */
const lookedThroughUpTo = 256 * 1024 * 1024;

/*
 * A reading's row is small and clustered by stream and time, since every trend walks it so; its spectrum, a thousand times larger, stands
 * apart under the reading's number and can be retired without touching the row.
 */
const readingsAndEvents = `
CREATE TABLE stream (k INTEGER PRIMARY KEY, id TEXT NOT NULL UNIQUE, state TEXT) STRICT;
CREATE TABLE model (k INTEGER PRIMARY KEY, id TEXT NOT NULL UNIQUE, name TEXT NOT NULL, properties TEXT NOT NULL, text TEXT NOT NULL) STRICT;
CREATE TABLE limit_set (stream INTEGER NOT NULL REFERENCES stream, version INTEGER NOT NULL, json TEXT NOT NULL,
  PRIMARY KEY (stream, version)) STRICT, WITHOUT ROWID;
CREATE TABLE axis (k INTEGER PRIMARY KEY, json TEXT NOT NULL UNIQUE) STRICT;
CREATE TABLE reading (
  stream INTEGER NOT NULL REFERENCES stream, time INTEGER NOT NULL, sequence INTEGER NOT NULL,
  number INTEGER NOT NULL, received INTEGER NOT NULL, late INTEGER NOT NULL, history INTEGER NOT NULL, gap_from INTEGER,
  verdict INTEGER NOT NULL, t2 REAL, q REAL, leverage REAL, nearest REAL, t2_ratio REAL, q_ratio REAL, nearest_ratio REAL,
  properties BLOB NOT NULL, unusable TEXT, model INTEGER REFERENCES model, limit_set INTEGER NOT NULL, quality TEXT, context TEXT,
  PRIMARY KEY (stream, time, sequence)) STRICT, WITHOUT ROWID;
CREATE TABLE spectrum (number INTEGER PRIMARY KEY, axis INTEGER REFERENCES axis, width INTEGER NOT NULL, data BLOB NOT NULL) STRICT;
CREATE TABLE event (cursor INTEGER PRIMARY KEY, at INTEGER NOT NULL, stream TEXT, kind TEXT NOT NULL, json TEXT NOT NULL) STRICT;
CREATE INDEX event_by_stream ON event (stream, cursor);
CREATE TABLE excursion (id TEXT PRIMARY KEY, stream TEXT NOT NULL, start INTEGER NOT NULL, last INTEGER NOT NULL, json TEXT NOT NULL) STRICT;
CREATE INDEX excursion_by_start ON excursion (start);
CREATE TABLE refusal (id INTEGER PRIMARY KEY, digest BLOB NOT NULL UNIQUE, stream TEXT NOT NULL, topic TEXT NOT NULL,
  received INTEGER NOT NULL, last INTEGER NOT NULL, count INTEGER NOT NULL, reason TEXT NOT NULL, says TEXT NOT NULL, payload BLOB NOT NULL) STRICT;
CREATE TABLE refusal_total (stream TEXT NOT NULL, reason TEXT NOT NULL, count INTEGER NOT NULL, PRIMARY KEY (stream, reason)) STRICT, WITHOUT ROWID;
`;

/** What a rehearsal asks for. Until then the reason stood in words only; of these it must know one. */
const forRehearsal = `
ALTER TABLE reading ADD COLUMN unusable_reason TEXT;
UPDATE reading SET unusable_reason = 'frozen' WHERE unusable LIKE 'exactly the same spectrum %';
CREATE INDEX process_state ON event (stream, at) WHERE kind = 'process state';
`;

/** Limits that somebody is still thinking about. */
const keptLimits = `
CREATE TABLE kept_limits (stream INTEGER NOT NULL REFERENCES stream, name TEXT NOT NULL, time INTEGER NOT NULL, json TEXT NOT NULL,
  PRIMARY KEY (stream, name)) STRICT, WITHOUT ROWID;
`;

/** Opens the record for its single writer; makes it when there is none, brings an older form up to date. @throws StoreError for a damaged or newer file. */
export function openForWriting(file: string): Database.Database {
  mkdirSync(dirname(file), { recursive: true });
  const database = open(file, { timeout: 5000 });
  try {
    prepare(database, file);
    database.pragma(`busy_timeout = ${busyMs}`);
  } catch (cause) {
    database.close();
    throw isDamage(cause) ? damaged(file, cause) : cause;
  }
  return database;
}

function prepare(database: Database.Database, file: string): void {
  // FULL: a commit is on the disk when it returns, also after a power cut; the acknowledgement to the publisher rests on it.
  database.pragma("journal_mode = WAL");
  database.pragma("synchronous = FULL");
  database.pragma("foreign_keys = ON");
  // The log is folded back every 4 MB or so, so that readers never wade through a long one.
  database.pragma("wal_autocheckpoint = 1000");
  bringUp(database, file);
  const small = statSync(file).size <= lookedThroughUpTo;
  const damage = whatIsDamaged(database, small ? "whole" : "small tables");
  if (damage !== undefined) throw damaged(file, new Error(damage));
}

/** Opens the record for reading beside its writer. @throws StoreError when it is not there, damaged or newer. */
export function openForReading(file: string): Database.Database {
  if (!existsSync(file)) {
    throw new StoreError(file, {
      got: "not there",
      expected: "the record of a plant",
      todo: "Start the service once with this data folder, or name another.",
    });
  }
  const database = open(file, { readonly: true, timeout: 5000 });
  const form = formOf(database, file);
  if (form < steps.length) {
    database.close();
    throw new StoreError(file, {
      got: `a record of form ${form}`,
      expected: `form ${steps.length}`,
      todo: "Start the service once with this data folder: it brings the record up to date.",
    });
  }
  return database;
}

function open(file: string, options: Database.Options): Database.Database {
  try {
    const database = new Database(file, options);
    database.pragma("schema_version"); // the first real look at the file: a damaged header shows here
    return database;
  } catch (cause) {
    throw damaged(file, cause);
  }
}

function isDamage(cause: unknown): boolean {
  return cause instanceof Database.SqliteError && /^SQLITE_(CORRUPT|NOTADB)/.test(cause.code);
}

function damaged(file: string, cause: unknown): StoreError {
  return new StoreError(file, {
    got: `not readable as a database (${(cause as Error).message})`,
    expected: "the record of a plant",
    todo: "Move it aside with its -wal and -shm files, put the last backup in its place, and start again; do not delete it.",
    cause,
  });
}

/** Brings an older record to the present form, all of it or (when the power fails meanwhile) nothing. */
function bringUp(database: Database.Database, file: string): void {
  const version = formOf(database, file);
  if (version === steps.length) return;
  database.transaction(() => {
    for (const step of steps.slice(version)) step(database);
    database.pragma(`user_version = ${steps.length}`);
  })();
}

/** @throws StoreError for a record of a newer form than this version knows */
function formOf(database: Database.Database, file: string): number {
  const form = database.pragma("user_version", { simple: true }) as number;
  if (form <= steps.length) return form;
  throw new StoreError(file, {
    got: `a record of form ${form}`,
    expected: `form ${steps.length} or older`,
    todo: "Run the version of Millrace that wrote it, or name another data folder.",
  });
}
