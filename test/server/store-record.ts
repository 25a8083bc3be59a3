import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { freshState, type StreamState } from "../../core/judging/index.ts";
import type { Judged, RecordedEvent, Verdict } from "../../core/messages/index.ts";
import { sqliteReader } from "../../server/store/sqlite/reader.ts";
import { sqliteWriter } from "../../server/store/sqlite/writer.ts";
import type { Changes, NewReading, StoreReader, StoreWriter } from "../../server/store/store.ts";

/** A maker of the record: how its writer and its reader are opened on the same record, again and again. */
export interface Maker {
  name: string;
  place: () => { writer: () => StoreWriter; reader: () => StoreReader; file: string; remove: () => void };
}

export const makers: Maker[] = [
  {
    name: "SQLite",
    place() {
      const folder = mkdtempSync(join(tmpdir(), "millrace-store-"));
      const file = join(folder, "record.db");
      return {
        writer: () => sqliteWriter(file),
        reader: () => sqliteReader(file),
        file,
        remove: () => rmSync(folder, { recursive: true, force: true }),
      };
    },
  },
];

export const stream = "s-1";
export const names = ["ethanol", "water"];
export const modelId = "a".repeat(64);

export function changes(some: Partial<Changes>): Changes {
  return { readings: [], refusals: [], events: [], excursions: [], states: new Map(), ...some };
}

export function stateWith(more: Partial<StreamState>): Map<string, StreamState> {
  return new Map([[stream, { ...freshState, ...more }]]);
}

export function reading(time: number, more: Partial<Judged> = {}, about: Partial<NewReading> = {}): NewReading {
  const verdict: Verdict[] = ["inside"];
  const judged: Judged = {
    stream,
    time,
    sequence: 1,
    properties: { ethanol: { value: 90.125, uncertainty: 0.25 }, water: { value: 9, uncertainty: null } },
    t2: 3.5,
    q: 1.25e-5,
    leverage: 0.125,
    nearest: 1.5,
    ratios: { t2: 0.5, q: 0.75, nearest: 0.25 },
    verdict,
    model: modelId,
    limitSet: 1,
    ...more,
  };
  const values = Float64Array.of(0.5, 0.1, Number.NaN);
  return { judged, receivedAt: time + 5, late: false, history: false, gapFrom: null, values, ...about };
}

export function event(cursor: number, more: Partial<RecordedEvent> = {}): RecordedEvent {
  return { cursor, at: 1000 * cursor, stream, kind: "alarm raised", says: `event ${cursor}`, ...more };
}
