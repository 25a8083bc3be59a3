import type Database from "better-sqlite3";

/** Up to when a stream's spectra have been gone through. */
export function addRetirement(db: Database.Database): void {
  db.exec("CREATE TABLE retired (stream INTEGER PRIMARY KEY REFERENCES stream, upto INTEGER NOT NULL) STRICT");
}

/** Removes old spectra step by step, and remembers how far it came; what lies in an excursion is passed over and stays for ever. */
export class Retirement {
  readonly #db;
  readonly #sql;
  #upto: Map<number, number>;

  constructor(db: Database.Database) {
    this.#db = db;
    this.#sql = {
      all: db.prepare<[], { stream: number; upto: number }>("SELECT stream, upto FROM retired"),
      put: db.prepare("INSERT OR REPLACE INTO retired VALUES (?, ?)"),
      next: db.prepare<[number, number, number, number], { time: number; number: number }>(
        "SELECT time, number FROM reading WHERE stream = ? AND time >= ? AND time < ? ORDER BY time LIMIT ?",
      ),
      kept: db.prepare<[string, number, number], { start: number; last: number }>(
        "SELECT start, last FROM excursion WHERE stream = ? AND last >= ? AND start <= ?",
      ),
      // The newest number stays taken: the next reading's is one more.
      remove: db.prepare("DELETE FROM spectrum WHERE number = ? AND number < (SELECT max(number) FROM spectrum)"),
    };
    this.#upto = this.#recorded();
  }

  /** A reading has come in (within a transaction): one from a time that was gone through already has to be gone through again. */
  note(stream: number, time: number): void {
    const upto = this.#upto.get(stream);
    if (upto === undefined || time >= upto) return;
    this.#remember(stream, time);
  }

  /** What was noted since the last commit did not come about. */
  forget(): void {
    this.#upto = this.#recorded();
  }

  /** Goes through at most `most` readings of before `before`. Are there more? */
  step(id: string, stream: number, before: number, most: number): boolean {
    return this.#db
      .transaction(() => {
        const rows = this.#sql.next.all(stream, this.#upto.get(stream) ?? 0, before, most);
        if (rows.length === 0) return false;
        const last = rows[rows.length - 1].time;
        const excursions = this.#sql.kept.all(id, rows[0].time, last);
        const isKept = (time: number) => excursions.some(({ start, last }) => start <= time && time <= last);
        for (const { time, number } of rows) if (!isKept(time)) this.#sql.remove.run(number);
        // Readings of the very same moment may stand on both sides of the step's end; a step of nothing but those must still come on.
        const more = rows.length === most;
        this.#remember(stream, more && last > rows[0].time ? last : last + 1);
        return more;
      })
      .immediate();
  }

  #remember(stream: number, upto: number): void {
    this.#sql.put.run(stream, upto);
    this.#upto.set(stream, upto);
  }

  #recorded(): Map<number, number> {
    return new Map(this.#sql.all.all().map(({ stream, upto }) => [stream, upto]));
  }
}
