import type Database from "better-sqlite3";
import type { StreamState } from "../../../core/judging/index.ts";
import type { KeptLimits, LimitSet } from "../../../core/limit-set/index.ts";
import type { Excursion, RecordedEvent } from "../../../core/messages/index.ts";
import type { StoreReader } from "../store.ts";
import { handoverReader } from "./handover.ts";
import { laboratoryReader } from "./laboratory.ts";
import { openForReading } from "./open.ts";
import { pageQueries } from "./pages.ts";
import { type ReadingRow, readingRows } from "./reading-rows.ts";
import { accountQuery } from "./stream-account.ts";
import { spectraQuery, stretchQuery } from "./stretch.ts";
import { trendQuery } from "./trend.ts";

/** The SQLite record's reader: its own connection, read only, beside the running writer. @throws StoreError */
export function sqliteReader(file: string): StoreReader {
  const db = openForReading(file);
  const streams = new Map<string, number>();
  const sql = {
    stream: db.prepare<[string], number>("SELECT k FROM stream WHERE id = ?").pluck(),
    modelText: db.prepare<[string], string>("SELECT text FROM model WHERE id = ?").pluck(),
    before: readingQuery(db, "time <= ? ORDER BY time DESC, sequence DESC"),
    strictlyBefore: readingQuery(db, "time < ? ORDER BY time DESC, sequence DESC"),
    after: db
      .prepare<[number, number], number>("SELECT time FROM reading WHERE stream = ? AND time > ? ORDER BY time LIMIT 1")
      .pluck(),
    limitSet: db
      .prepare<[number, number], string>(
        "SELECT json FROM limit_set WHERE stream = ? AND version <= ? ORDER BY version DESC LIMIT 1",
      )
      .pluck(),
    limitSets: db
      .prepare<[number], string>("SELECT json FROM limit_set WHERE stream = ? ORDER BY version DESC")
      .pluck(),
    keptLimits: db
      .prepare<[number], string>("SELECT json FROM kept_limits WHERE stream = ? ORDER BY time DESC")
      .pluck(),
    state: db.prepare<[string], string | null>("SELECT state FROM stream WHERE id = ?").pluck(),
    totals: db.prepare<Named, { stream: string; reason: string; count: number }>(
      "SELECT stream, reason, count FROM refusal_total WHERE @stream IS NULL OR stream = @stream ORDER BY stream, reason",
    ),
    refusals: db.prepare<Named, RefusalRow>(
      "SELECT id, stream, topic, received, last, count, reason, says FROM refusal WHERE @stream IS NULL OR stream = @stream ORDER BY last DESC, id DESC LIMIT @limit",
    ),
    events: db
      .prepare<Named, string>(
        "SELECT json FROM event WHERE (@stream IS NULL OR stream = @stream) AND (@about IS NULL OR kind LIKE @about || ' %') AND cursor > @after AND cursor < @before ORDER BY cursor DESC LIMIT @limit",
      )
      .pluck(),
    alarmEvents: db
      .prepare<Named, string>(
        "SELECT json FROM event WHERE at >= @from AND at < @to AND kind >= 'alarm ' AND kind < 'alarm!' ORDER BY cursor",
      )
      .pluck(),
    excursions: db
      .prepare<Named, string>(
        "SELECT json FROM excursion WHERE (@stream IS NULL OR stream = @stream) AND last >= @from AND start < @to ORDER BY start DESC LIMIT @limit",
      )
      .pluck(),
    eventsBetween: db
      .prepare<Named, string>(
        "SELECT json FROM event WHERE at >= @from AND at < @to AND NOT (kind >= 'alarm ' AND kind < 'alarm!') ORDER BY cursor",
      )
      .pluck(),
    eventsOfKind: db
      .prepare<[string, number, number], string>(
        "SELECT json FROM event WHERE kind = ? AND at >= ? AND at < ? ORDER BY cursor",
      )
      .pluck(),
    lastEvent: db
      .prepare<[string, number, string], string>(
        "SELECT json FROM event WHERE kind = ? AND at < ? AND stream = ? ORDER BY at DESC, cursor DESC LIMIT 1",
      )
      .pluck(),
    refusedBetween: db.prepare<
      Named,
      { stream: string; reason: string; says: string; count: number; first: number; last: number }
    >(
      "SELECT stream, reason, says, sum(count) AS count, min(received) AS first, max(last) AS last FROM refusal WHERE last >= @from AND received < @to GROUP BY stream, reason ORDER BY count DESC",
    ),
    excursionsBeside: db.prepare<Named, { previous: number | null; next: number | null }>(
      "SELECT (SELECT max(start) FROM excursion WHERE stream = @stream AND start < @at) AS previous, (SELECT min(start) FROM excursion WHERE stream = @stream AND start > @at) AS next",
    ),
    extent: db.prepare<[number], { readings: number; first: number | null }>(
      "SELECT count(*) AS readings, min(time) AS first FROM reading WHERE stream = ?",
    ),
  };
  const { modelOf, readingOf } = readingRows(db);
  const labResults = laboratoryReader(db);
  const trend = trendQuery(db, modelOf);
  const account = accountQuery(db, modelOf);
  const stretch = stretchQuery(db, modelOf);
  const spectra = spectraQuery(db);

  function streamKey(id: string): number {
    const known = streams.get(id);
    if (known !== undefined) return known;
    const k = sql.stream.get(id);
    if (k !== undefined) streams.set(id, k);
    return k ?? -1; // a stream that was never recorded: every query about it is empty
  }

  return {
    ...pageQueries(db, { streamKey, readingOf }),
    readingBefore(stream, at, strictly) {
      const query = strictly ? sql.strictlyBefore : sql.before;
      const row = query.get(streamKey(stream), at);
      return row && readingOf(stream, row);
    },
    timeAfter: (stream, at) => sql.after.get(streamKey(stream), at),
    trend: (stream, properties, from, to, points) => trend(stream, streamKey(stream), properties, from, to, points),
    refusals(stream, limit) {
      return {
        totals: sql.totals.all({ stream: stream ?? null }),
        latest: sql.refusals.all({ stream: stream ?? null, limit }).map(({ received, last, ...row }) => ({
          ...row,
          stream: row.stream === "" ? null : row.stream,
          receivedAt: received,
          lastAt: last,
        })),
      };
    },
    events({ stream, about, after = 0, before = Number.MAX_SAFE_INTEGER, limit }) {
      return sql.events
        .all({ stream: stream ?? null, about: about ?? null, after, before, limit })
        .map((json) => JSON.parse(json) as RecordedEvent);
    },
    alarmEvents({ from, to, history }) {
      const events = sql.alarmEvents.all({ from, to }).map((json) => JSON.parse(json) as RecordedEvent);
      return history ? events : events.filter((event) => !event.history);
    },
    excursionsBeside: (stream, at) => sql.excursionsBeside.get({ stream, at })!,
    excursions({ stream, from = 0, to = Number.MAX_SAFE_INTEGER, limit }) {
      return sql.excursions
        .all({ stream: stream ?? null, from, to, limit })
        .map((json) => JSON.parse(json) as Excursion);
    },
    limitSet(stream, version = Number.MAX_SAFE_INTEGER) {
      const json = sql.limitSet.get(streamKey(stream), version);
      return json ? (JSON.parse(json) as LimitSet) : undefined;
    },
    limitSets: (stream) => sql.limitSets.all(streamKey(stream)).map((json) => JSON.parse(json) as LimitSet),
    keptLimits: (stream) => sql.keptLimits.all(streamKey(stream)).map((json) => JSON.parse(json) as KeptLimits),
    proposals(stream) {
      const json = sql.state.get(stream);
      return json ? ((JSON.parse(json) as Partial<StreamState>).proposals?.waiting ?? []) : [];
    },
    account: (stream, { wanted, from, to, gapMs }) => account(streamKey(stream), wanted, from, to, gapMs),
    eventsBetween: (from, to) => sql.eventsBetween.all({ from, to }).map((json) => JSON.parse(json) as RecordedEvent),
    eventsOfKind: (kind, from, to) =>
      sql.eventsOfKind.all(kind, from, to).map((json) => JSON.parse(json) as RecordedEvent),
    lastEvent(kind, stream, before) {
      const json = sql.lastEvent.get(kind, before, stream);
      return json === undefined ? undefined : (JSON.parse(json) as RecordedEvent);
    },
    refusedBetween: (from, to) =>
      sql.refusedBetween.all({ from, to }).map((row) => ({ ...row, stream: row.stream === "" ? null : row.stream })),
    handover: handoverReader(db),
    labResults,
    modelText: (id) => sql.modelText.get(id),
    stretch: (stream, from, to) => stretch(streamKey(stream), stream, from, to),
    spectra: (stream, from, to) => spectra(streamKey(stream), from, to),
    extent: (stream) => sql.extent.get(streamKey(stream))!,
    close: () => void db.close(),
  };
}

type Named = Record<string, string | number | null>;

interface RefusalRow {
  id: number;
  stream: string;
  topic: string;
  received: number;
  last: number;
  count: number;
  reason: string;
  says: string;
}

function readingQuery(db: Database.Database, where: string) {
  return db.prepare<[number, number], ReadingRow>(`SELECT * FROM reading WHERE stream = ? AND ${where} LIMIT 1`);
}
