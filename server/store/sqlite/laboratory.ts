import type Database from "better-sqlite3";
import type { LabIdentity, LabResult } from "../../../core/messages/index.ts";

/*
 * Every version of every result stands in a row of its own and is never changed: a correction or a withdrawal adds one. The newest version is
 * the result.
 */
export const laboratorySchema = `
CREATE TABLE lab_result (stream TEXT NOT NULL, property TEXT NOT NULL, time INTEGER NOT NULL, method TEXT NOT NULL, sample TEXT NOT NULL,
  version INTEGER NOT NULL, json TEXT NOT NULL, PRIMARY KEY (stream, property, time, method, sample, version)) STRICT, WITHOUT ROWID;
CREATE INDEX lab_result_by_time ON lab_result (stream, time);
`;

/** Writes versions of results within the writer's transaction, and finds the newest of one. */
export function laboratoryWriter(db: Database.Database) {
  const insert = db.prepare("INSERT INTO lab_result VALUES (?, ?, ?, ?, ?, ?, ?)");
  const newest = db
    .prepare<[string, string, number, string, string], string>(
      "SELECT json FROM lab_result WHERE stream = ? AND property = ? AND time = ? AND method = ? AND sample = ? ORDER BY version DESC LIMIT 1",
    )
    .pluck();
  return {
    add(result: LabResult): void {
      const { stream, property, time, method, sample, version } = result;
      insert.run(stream, property, time, method, sample, version, JSON.stringify(result));
    },
    newest(stream: string, { property, time, method, sample }: LabIdentity): LabResult | undefined {
      const json = newest.get(stream, property, time, method, sample);
      return json === undefined ? undefined : (JSON.parse(json) as LabResult);
    },
  };
}

/** Finds the newest versions of a stream's results. */
export function laboratoryReader(db: Database.Database) {
  const between = db
    .prepare<{ stream: string; property: string | null; from: number; to: number }, string>(
      `SELECT json FROM lab_result AS r WHERE stream = @stream AND time >= @from AND time < @to AND (@property IS NULL OR property = @property)
         AND version = (SELECT max(version) FROM lab_result WHERE (stream, property, time, method, sample) =
           (r.stream, r.property, r.time, r.method, r.sample))
       ORDER BY time DESC, property, method, sample`,
    )
    .pluck();
  return (query: { stream: string; property?: string; from: number; to: number }): LabResult[] =>
    between.all({ ...query, property: query.property ?? null }).map((json) => JSON.parse(json) as LabResult);
}
