import type Database from "better-sqlite3";
import { Summary, type SummedReading, type SummedStretch } from "./summary.ts";

/**
 * Stretches that readings are rolled up by, ms, counted from the epoch: the minute and the hour, and ten minutes between them, so that a
 * trend of 2 000 intervals never has more than 12 000 stretches to join (with the two alone it would be 120 000).
 */
export const rollupLevels = [60_000, 600_000, 3_600_000] as const;

export const rollupSchema = `
CREATE TABLE rollup (
  stream INTEGER NOT NULL REFERENCES stream, level INTEGER NOT NULL, start INTEGER NOT NULL, model INTEGER NOT NULL,
  count INTEGER NOT NULL, verdict INTEGER NOT NULL, first INTEGER NOT NULL, last INTEGER NOT NULL, numbers BLOB NOT NULL,
  PRIMARY KEY (stream, level, start, model)) STRICT, WITHOUT ROWID;
CREATE INDEX reading_after_gap ON reading (stream, time, gap_from) WHERE gap_from IS NOT NULL;
`;

interface Open {
  key: [stream: number, level: number, start: number, model: number];
  places: readonly number[];
  summary: Summary;
}

/**
 * Keeps the roll-ups in step with the readings: `add` each new reading, then `write` within the same transaction. Nothing is held from one
 * transaction to the next, so a commit that failed leaves no trace here.
 */
export class RollupWriter {
  readonly #get;
  readonly #put;
  readonly #open = new Map<string, Open>();

  constructor(db: Database.Database) {
    this.#get = db.prepare<[number, number, number, number], SummedStretch>(
      "SELECT count, verdict, first, last, numbers FROM rollup WHERE stream = ? AND level = ? AND start = ? AND model = ?",
    );
    this.#put = db.prepare("INSERT OR REPLACE INTO rollup VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)");
  }

  /** `model` is null for a reading that no model scored. */
  add(stream: number, model: number | null, reading: SummedReading): void {
    for (const level of rollupLevels) {
      const start = Math.floor(reading.time / level) * level;
      const { summary, places } = this.#stretch([stream, level, start, model ?? 0], reading.numbers.length / 16);
      summary.addReading(reading, places);
    }
  }

  write(): void {
    for (const { key, summary } of this.#open.values()) {
      const { count, verdict, first, last, numbers } = summary;
      this.#put.run(...key, count, verdict, first, last, numbers);
    }
    this.#open.clear();
  }

  /** Forgets what was added since the last `write`: its transaction did not come about. */
  forget(): void {
    this.#open.clear();
  }

  #stretch(key: Open["key"], properties: number): Open {
    const name = key.join(" ");
    const known = this.#open.get(name);
    if (known) return known;
    const places = Array.from({ length: properties }, (_, i) => i);
    const summary = new Summary(properties);
    const recorded = this.#get.get(...key);
    if (recorded) summary.addStretch(recorded, places);
    const open = { key, places, summary };
    this.#open.set(name, open);
    return open;
  }
}

interface Row extends SummedReading {
  stream: number;
  sequence: number;
  model: number | null;
}

/** Readings taken into memory at once by `rollUpAll`. */
const portion = 10_000;

/** Rolls up every reading on record, for a record that was kept without. To be called within a transaction. */
export function rollUpAll(db: Database.Database): void {
  const rollups = new RollupWriter(db);
  const after = db.prepare<[number, number, number, number], Row>(
    `SELECT stream, time, sequence, model, verdict, t2_ratio AS t2, q_ratio AS q, properties AS numbers FROM reading
     WHERE (stream, time, sequence) > (?, ?, ?) ORDER BY stream, time, sequence LIMIT ?`,
  );
  let last: { stream: number; time: number; sequence: number } | undefined = { stream: 0, time: 0, sequence: 0 };
  while (last) {
    const rows: Row[] = after.all(last.stream, last.time, last.sequence, portion);
    for (const row of rows) rollups.add(row.stream, row.model, row);
    rollups.write();
    last = rows.at(-1);
  }
}
