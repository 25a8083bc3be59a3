import type Database from "better-sqlite3";

/** Small tables on which everything else rests; they are looked through at every start, however large the record. */
const smallTables = ["stream", "model", "limit_set", "axis", "excursion"];

/**
 * Looks for damage: of the whole record (about a second for each 500 MB), or of the tables on which all rests.
 *
 * @returns what is damaged, in SQLite's words; undefined when nothing was found
 */
export function whatIsDamaged(db: Database.Database, extent: "whole" | "small tables"): string | undefined {
  const checks = extent === "whole" ? ["quick_check(1)"] : smallTables.map((table) => `quick_check('${table}')`);
  for (const check of checks) {
    const found = db.pragma(check, { simple: true });
    if (found !== "ok") return String(found).replaceAll(/\s+/g, " ");
  }
  return undefined;
}
