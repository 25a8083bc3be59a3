import type Database from "better-sqlite3";
import { type AxisSpec, type Judged, type Prediction, verdictsOfMask } from "../../../core/messages/index.ts";
import type { StoredReading } from "../store.ts";
import { spectrumValues } from "./spectrum-bytes.ts";

/** A row of the table of readings. */
export interface ReadingRow {
  time: number;
  sequence: number;
  number: number;
  received: number;
  late: number;
  history: number;
  verdict: number;
  t2: number | null;
  q: number | null;
  leverage: number | null;
  nearest: number | null;
  t2_ratio: number | null;
  q_ratio: number | null;
  nearest_ratio: number | null;
  properties: Buffer;
  unusable: string | null;
  model: number | null;
  limit_set: number;
  unusable_reason: string | null;
}

export interface KnownModel {
  id: string;
  properties: string[];
}

/** Makes readings of rows, with what stands apart from them: the model's names and the spectrum. */
export function readingRows(db: Database.Database) {
  const models = new Map<number, KnownModel>();
  const model = db.prepare<[number], { id: string; properties: string }>(
    "SELECT id, properties FROM model WHERE k = ?",
  );
  const spectrum = db.prepare<[number], { width: number; data: Buffer; axis: string | null }>(
    "SELECT width, data, json AS axis FROM spectrum LEFT JOIN axis ON axis.k = spectrum.axis WHERE number = ?",
  );

  function modelOf(k: number | null): KnownModel | undefined {
    if (k === null) return undefined;
    const known = models.get(k);
    if (known) return known;
    const row = model.get(k);
    if (!row) return undefined;
    const found = { id: row.id, properties: JSON.parse(row.properties) as string[] };
    models.set(k, found);
    return found;
  }
  function readingOf(stream: string, row: ReadingRow): StoredReading {
    const kept = spectrum.get(row.number);
    return {
      judged: judgedOf(stream, row, modelOf(row.model)),
      receivedAt: row.received,
      late: row.late === 1,
      history: row.history === 1,
      values: kept ? spectrumValues(kept.data, kept.width) : null,
      ...(kept?.axis ? { axis: JSON.parse(kept.axis) as AxisSpec } : {}),
    };
  }
  return { modelOf, readingOf };
}

function judgedOf(stream: string, row: ReadingRow, model: KnownModel | undefined): Judged {
  const numbers = spectrumValues(row.properties, 8);
  const properties: Record<string, Prediction> = {};
  model?.properties.forEach((name, i) => {
    properties[name] = { value: orNull(numbers[2 * i]), uncertainty: orNull(numbers[2 * i + 1]) };
  });
  return {
    stream,
    time: row.time,
    sequence: row.sequence,
    properties,
    t2: row.t2,
    q: row.q,
    leverage: row.leverage,
    nearest: row.nearest,
    ratios: { t2: row.t2_ratio, q: row.q_ratio, nearest: row.nearest_ratio },
    verdict: verdictsOfMask(row.verdict),
    ...(row.unusable === null ? {} : { unusable: row.unusable }),
    ...(row.unusable_reason === null ? {} : { unusableReason: row.unusable_reason }),
    model: model?.id ?? null,
    limitSet: row.limit_set,
  };
}

function orNull(value: number): number | null {
  return Number.isNaN(value) ? null : value;
}
