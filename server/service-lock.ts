import { mkdirSync } from "node:fs";
import { join } from "node:path";
import Database from "better-sqlite3";
import { MillraceError, mismatchSentence } from "../core/errors.ts";

export class LockError extends MillraceError {
  readonly code = "data-folder-in-use";
}

/**
 * Holds a data folder for one service. The lock is the operating system's (through SQLite), so a killed service leaves none behind.
 * @returns what releases it. @throws LockError when another service has the folder.
 */
export function lockDataFolder(folder: string): () => void {
  mkdirSync(folder, { recursive: true });
  const file = join(folder, "in-use.lock");
  const db = new Database(file, { timeout: 0 });
  try {
    db.pragma("locking_mode = EXCLUSIVE");
    db.exec("BEGIN EXCLUSIVE");
  } catch (cause) {
    db.close();
    const mismatch = {
      got: "in use by another running Millrace",
      expected: "a data folder of its own",
      todo: "Stop the other one, or name another folder.",
    };
    throw new LockError(mismatchSentence(folder, mismatch), { cause });
  }
  return () => void db.close();
}
