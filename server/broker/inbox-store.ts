import Database from "better-sqlite3";

/**
 * Messages that a publisher has been promised ("acknowledged means found after a power cut") and that the engine has not yet put on record.
 * One writer (the broker's thread), one reader (the engine's); rows are deleted once the engine says that it has them.
 */
const schema =
  "CREATE TABLE IF NOT EXISTS message (n INTEGER PRIMARY KEY AUTOINCREMENT, topic TEXT NOT NULL, received INTEGER NOT NULL, payload BLOB NOT NULL) STRICT";

export interface InboxRow {
  n: number;
  topic: string;
  received: number;
  payload: Buffer;
}

export function openInboxForWriting(file: string): Database.Database {
  const db = new Database(file, { timeout: 5000 });
  db.pragma("journal_mode = WAL");
  db.pragma("synchronous = FULL"); // the PUBACK rests on it
  db.exec(schema);
  return db;
}

export function openInboxForReading(file: string): Database.Database {
  return new Database(file, { readonly: true, timeout: 5000 });
}
