import { createHash } from "node:crypto";
import type { StreamState } from "../../../core/judging/index.ts";
import type { LimitSet } from "../../../core/limit-set/index.ts";
import { type AxisSpec, type Excursion, type Judged, verdictMask } from "../../../core/messages/index.ts";
import type { Changes, NewReading, NewRefusal, StoreWriter } from "../store.ts";
import { chainHash, chainStart } from "./event-chain.ts";
import { handoverBook, handoverWriter } from "./handover.ts";
import { laboratoryWriter } from "./laboratory.ts";
import { openForWriting } from "./open.ts";
import { type ReadingRow, readingRows } from "./reading-rows.ts";
import { Retirement } from "./retirement.ts";
import { RollupWriter } from "./rollup.ts";
import { spectrumBytes } from "./spectrum-bytes.ts";

/** Refusals kept with their payload's beginning; older ones live on in the totals. */
const mostRefusals = 10_000;
const payloadKept = 200;
const topicKept = 400;

/** What people put to an excursion (label, notes) stays, unless the new form has its own. RFC 7396: the first patch takes out what is null. */
const upsertExcursion = `INSERT INTO excursion VALUES (?, ?, ?, ?, ?) ON CONFLICT (id) DO UPDATE SET last = excluded.last, json = json_patch(
  json_patch('{}', json_object('label', json_extract(json, '$.label'), 'notes', json_extract(json, '$.notes'))), excluded.json)`;

/** The SQLite record's writer. One process, one thread: WAL mode lets readers go on beside it. @throws StoreError */
export function sqliteWriter(file: string): StoreWriter {
  const db = openForWriting(file);
  const streams = new Map<string, number>();
  const models = new Map<string, { k: number; properties: string[] }>();
  const axes = new Map<string, number>();

  const sql = {
    stream: db.prepare("INSERT INTO stream (id) VALUES (?) ON CONFLICT DO UPDATE SET id = id RETURNING k").pluck(),
    state: db.prepare("SELECT state FROM stream WHERE id = ?").pluck(),
    setState: db.prepare("UPDATE stream SET state = ? WHERE k = ?"),
    reading: db.prepare(`INSERT INTO reading VALUES (${Array(23).fill("?").join(", ")}) ON CONFLICT DO NOTHING`),
    spectrum: db.prepare("INSERT INTO spectrum VALUES (?, ?, ?, ?)"),
    event: db.prepare("INSERT INTO event VALUES (?, ?, ?, ?, ?, ?)"),
    excursion: db.prepare(upsertExcursion),
    excursionById: db.prepare<[string], string>("SELECT json FROM excursion WHERE id = ?").pluck(),
    refusal: db.prepare(
      `INSERT INTO refusal (digest, stream, topic, received, last, count, reason, says, payload) VALUES (?, ?, ?, ?, ?, 1, ?, ?, ?)
       ON CONFLICT (digest) DO UPDATE SET count = count + 1, last = excluded.last`,
    ),
    refusalTotal: db.prepare("INSERT INTO refusal_total VALUES (?, ?, 1) ON CONFLICT DO UPDATE SET count = count + 1"),
    trimRefusals: db.prepare("DELETE FROM refusal WHERE id <= (SELECT max(id) FROM refusal) - ?"),
    recorded: db.prepare("SELECT 1 FROM reading WHERE stream = ? AND time = ? AND sequence = ?").pluck(),
    axis: db.prepare("INSERT INTO axis (json) VALUES (?) ON CONFLICT DO UPDATE SET json = json RETURNING k").pluck(),
    model: db.prepare<[string], { k: number; properties: string }>("SELECT k, properties FROM model WHERE id = ?"),
    addModel: db.prepare("INSERT INTO model (id, name, properties, text) VALUES (?, ?, ?, ?) ON CONFLICT DO NOTHING"),
    modelText: db.prepare<[string], string>("SELECT text FROM model WHERE id = ?").pluck(),
    limitSet: db.prepare("SELECT json FROM limit_set WHERE stream = ? ORDER BY version DESC LIMIT 1").pluck(),
    addLimitSet: db.prepare("INSERT INTO limit_set VALUES (?, ?, ?)"),
    keepLimits: db.prepare("INSERT OR REPLACE INTO kept_limits VALUES (?, ?, ?, ?)"),
    dropLimits: db.prepare("DELETE FROM kept_limits WHERE stream = ? AND name = ?"),
    lastHash: db.prepare<[], Buffer>("SELECT hash FROM event ORDER BY cursor DESC LIMIT 1").pluck(),
    lastCursor: db.prepare("SELECT coalesce(max(cursor), 0) FROM event").pluck(),
    lastNumber: db.prepare("SELECT coalesce(max(number), 0) FROM spectrum").pluck(),
    firstLive: db
      .prepare<[number], number>("SELECT time FROM reading WHERE stream = ? AND history = 0 ORDER BY time LIMIT 1")
      .pluck(),
  };
  const handover = handoverWriter(db);
  const between = db.prepare<[number, number, number], ReadingRow>(
    "SELECT * FROM reading WHERE stream = ? AND time >= ? AND time <= ? ORDER BY time, sequence",
  );
  const { readingOf } = readingRows(db);
  const laboratory = laboratoryWriter(db);
  const rollups = new RollupWriter(db);
  const retirement = new Retirement(db);
  let number = sql.lastNumber.get() as number;
  let lastHash: Buffer = sql.lastHash.get() ?? chainStart;

  function streamKey(id: string): number {
    const known = streams.get(id);
    if (known !== undefined) return known;
    const k = sql.stream.get(id) as number;
    streams.set(id, k);
    return k;
  }
  function axisKey(axis: AxisSpec | undefined): number | null {
    if (!axis) return null;
    const json = JSON.stringify(axis);
    const known = axes.get(json);
    if (known !== undefined) return known;
    const k = sql.axis.get(json) as number;
    axes.set(json, k);
    return k;
  }
  function modelOf(id: string | null): { k: number; properties: string[] } | undefined {
    if (id === null) return undefined;
    const known = models.get(id);
    if (known) return known;
    const row = sql.model.get(id);
    if (!row) throw new Error(`model ${id} judged a reading but is not on record`);
    const model = { k: row.k, properties: JSON.parse(row.properties) as string[] };
    models.set(id, model);
    return model;
  }

  function addLimitSet(set: LimitSet): void {
    sql.addLimitSet.run(streamKey(set.stream), set.version, JSON.stringify(set));
  }
  function addReading(reading: NewReading): void {
    const { judged, receivedAt, late, history, gapFrom, quality, context } = reading;
    const model = modelOf(judged.model);
    const stream = streamKey(judged.stream);
    const verdict = verdictMask(judged.verdict);
    const numbers = propertyBytes(judged, model?.properties ?? []);
    const { changes } = sql.reading.run(
      stream,
      judged.time,
      judged.sequence,
      ++number,
      receivedAt,
      late ? 1 : 0,
      history ? 1 : 0,
      gapFrom,
      verdict,
      judged.t2,
      judged.q,
      judged.leverage,
      judged.nearest,
      judged.ratios.t2,
      judged.ratios.q,
      judged.ratios.nearest,
      numbers,
      judged.unusable ?? null,
      model?.k ?? null,
      judged.limitSet,
      quality ?? null,
      context ? JSON.stringify(context) : null,
      judged.unusableReason ?? null,
    );
    if (changes === 0) return; // a repeat within one batch: identity is (stream, time, sequence)
    const { width, data } = spectrumBytes(reading.values);
    sql.spectrum.run(number, axisKey(reading.axis), width, data);
    const { t2, q } = judged.ratios;
    retirement.note(stream, judged.time);
    rollups.add(stream, model?.k ?? null, { time: judged.time, verdict, t2, q, numbers });
  }
  function addRefusal(refusal: NewRefusal): void {
    const { topic, receivedAt, reason, says, payload } = refusal;
    const stream = refusal.stream ?? "";
    const digest = createHash("sha256").update(topic).update("\0").update(payload).digest().subarray(0, 16);
    const kept = Buffer.from(payload.subarray(0, payloadKept));
    sql.refusal.run(digest, stream, topic.slice(0, topicKept), receivedAt, receivedAt, reason, says, kept);
    sql.refusalTotal.run(stream, reason);
  }

  const commit = db.transaction((changes: Changes) => {
    for (const reading of changes.readings) addReading(reading);
    rollups.write();
    for (const refusal of changes.refusals) addRefusal(refusal);
    if (changes.refusals.length > 0) sql.trimRefusals.run(mostRefusals);
    let hash = lastHash;
    for (const event of changes.events) {
      const json = JSON.stringify(event);
      hash = chainHash(hash, json);
      sql.event.run(event.cursor, event.at, event.stream, event.kind, json, hash);
      if (event.handover) handover.add(event.handover);
    }
    for (const excursion of changes.excursions) {
      const { id, stream, start, end } = excursion;
      sql.excursion.run(id, stream, start, end ?? Number.MAX_SAFE_INTEGER, JSON.stringify(excursion));
    }
    for (const result of changes.labResults ?? []) laboratory.add(result);
    for (const set of changes.limitSets ?? []) addLimitSet(set);
    for (const { record, number } of changes.shiftRecords ?? []) handover.freeze(record, number);
    for (const { stream, name, kept } of changes.keptLimits ?? []) {
      if (kept) sql.keepLimits.run(streamKey(stream), name, kept.time, JSON.stringify(kept));
      else sql.dropLimits.run(streamKey(stream), name);
    }
    for (const [stream, state] of changes.states) sql.setState.run(JSON.stringify(state), streamKey(stream));
    return hash;
  });

  return {
    commit(changes) {
      try {
        lastHash = commit.immediate(changes);
      } catch (error) {
        // Rolled back, and with it rows that these remember.
        for (const remembered of [streams, axes]) remembered.clear();
        rollups.forget();
        retirement.forget();
        throw error;
      }
    },
    state(stream) {
      const json = sql.state.get(stream) as string | null | undefined;
      return json ? (JSON.parse(json) as StreamState) : undefined;
    },
    excursion(id) {
      const json = sql.excursionById.get(id);
      return json === undefined ? undefined : (JSON.parse(json) as Excursion);
    },
    isRecorded: (stream, time, sequence) => sql.recorded.get(streamKey(stream), time, sequence) !== undefined,
    readingsBetween: (stream, from, to) =>
      between.all(streamKey(stream), from, to).map((row) => readingOf(stream, row)),
    labResult: (stream, identity) => laboratory.newest(stream, identity),
    lastCursor: () => sql.lastCursor.get() as number,
    limitSet(stream) {
      const json = sql.limitSet.get(streamKey(stream)) as string | undefined;
      return json ? (JSON.parse(json) as LimitSet) : undefined;
    },
    addLimitSet,
    addModel: ({ id, name, properties, text }) => void sql.addModel.run(id, name, JSON.stringify(properties), text),
    modelText: (id) => sql.modelText.get(id),
    retireSpectra: (stream, before, most) => retirement.step(stream, streamKey(stream), before, most),
    handover: handoverBook(db),
    firstLive: (stream) => sql.firstLive.get(streamKey(stream)),
    close: () => void db.close(),
  };
}

/** Value and uncertainty of each of the model's properties, float64; NaN stands for none. */
function propertyBytes(judged: Judged, names: readonly string[]): Buffer {
  const numbers = new Float64Array(names.length * 2);
  names.forEach((name, i) => {
    numbers[2 * i] = judged.properties[name]?.value ?? Number.NaN;
    numbers[2 * i + 1] = judged.properties[name]?.uncertainty ?? Number.NaN;
  });
  return Buffer.from(numbers.buffer);
}
