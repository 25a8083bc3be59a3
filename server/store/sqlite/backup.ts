import { existsSync, renameSync, rmSync } from "node:fs";
import Database from "better-sqlite3";
import { openForReading, StoreError } from "./open.ts";
import { whatIsDamaged } from "./soundness.ts";

/** All pages in one step: within it the source stands still for this connection, while its writer goes on. In portions, every commit would begin it anew. */
const allPages = 0x7fffffff;

/**
 * Copies a record to another file while it is written to: everything committed by then, and nothing half. The copy is checked page by page
 * before it gets its name. @throws StoreError
 */
export async function backupRecord(file: string, to: string): Promise<{ megabytes: number }> {
  if (existsSync(to)) {
    throw new StoreError(to, {
      got: "there already",
      expected: "a new file",
      todo: "Name another one: a backup never overwrites an older one.",
    });
  }
  const source = openForReading(file);
  const part = `${to}.part`;
  try {
    await source.backup(part, { progress: () => allPages });
    const copy = new Database(part);
    const damage = whatIsDamaged(copy, "whole");
    copy.pragma("journal_mode = DELETE"); // one file, nothing beside it
    const pages = copy.pragma("page_count", { simple: true }) as number;
    const bytes = pages * (copy.pragma("page_size", { simple: true }) as number);
    copy.close();
    if (damage !== undefined) {
      throw new StoreError(file, {
        got: `damaged (${damage})`,
        expected: "a sound record",
        todo: "No backup was made. Keep the older ones; see the run book on restoring.",
      });
    }
    renameSync(part, to);
    return { megabytes: bytes / 1e6 };
  } finally {
    source.close();
    for (const left of [part, `${part}-wal`, `${part}-shm`, `${part}-journal`]) rmSync(left, { force: true });
  }
}
