import type Database from "better-sqlite3";
import type { RecordedEvent } from "../../../core/messages/index.ts";
import type { StoreReader } from "../store.ts";
import type { ReadingRow, readingRows } from "./reading-rows.ts";

/** Events read at a time: between two pages nothing is held, so the writer's log can be folded back meanwhile. */
const portion = 1000;

/** The record from one end to the other, in pages: for taking it out, not for screens. */
export function pageQueries(
  db: Database.Database,
  {
    streamKey,
    readingOf,
  }: { streamKey: (id: string) => number; readingOf: ReturnType<typeof readingRows>["readingOf"] },
): Pick<StoreReader, "readingsAfter" | "everyEvent" | "propertiesRecorded"> {
  const readings = db.prepare<[number, number, number, number, number], ReadingRow>(
    "SELECT * FROM reading WHERE stream = ? AND (time, sequence) > (?, ?) AND time < ? ORDER BY time, sequence LIMIT ?",
  );
  const events = db.prepare<[number, number, number, number], { cursor: number; json: string }>(
    "SELECT cursor, json FROM event WHERE cursor > ? AND at >= ? AND at < ? ORDER BY cursor LIMIT ?",
  );
  // By the roll-ups of an hour: a row for each hour and model, not for each reading.
  const properties = db
    .prepare<[number], string>(
      `SELECT properties FROM model JOIN (SELECT model, min(start) AS since FROM rollup WHERE stream = ? AND level = 3600000 GROUP BY model)
       ON model = k ORDER BY since`,
    )
    .pluck();

  return {
    readingsAfter: (stream, { time, sequence }, to, most) =>
      readings.all(streamKey(stream), time, sequence, to, most).map((row) => readingOf(stream, row)),
    *everyEvent(from, to) {
      let after = 0;
      for (;;) {
        const page = events.all(after, from, to, portion);
        for (const { json } of page) yield JSON.parse(json) as RecordedEvent;
        if (page.length < portion) return;
        after = page[page.length - 1].cursor;
      }
    },
    propertiesRecorded(stream) {
      const names = properties.all(streamKey(stream)).flatMap((json) => JSON.parse(json) as string[]);
      return [...new Set(names)];
    },
  };
}
