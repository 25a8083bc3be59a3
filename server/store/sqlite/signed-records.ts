import type Database from "better-sqlite3";
import { recordHash } from "../../../core/handover/index.ts";
import type { RecordedEvent } from "../../../core/messages/index.ts";

export interface SignedOutcome {
  records: number;
  /** the first that does not fit, by the event that holds its signature */
  broken?: { cursor: number; why: string };
}

/** Holds every record of a shift that was signed against the hash that stands with its signature in the chain of events. */
export function verifySignedRecords(db: Database.Database): SignedOutcome {
  const signatures = db
    .prepare<[], string>("SELECT json FROM event WHERE kind = 'handover signature' ORDER BY cursor")
    .pluck();
  const kept = db.prepare<[string], string>("SELECT json FROM shift_record WHERE hash = ? LIMIT 1").pluck();
  let records = 0;
  for (const text of signatures.all()) {
    const { cursor, handover } = JSON.parse(text) as RecordedEvent;
    if (handover?.kind !== "signature" || handover.side !== "outgoing") continue;
    const json = kept.get(handover.hash);
    if (json === undefined) return { records, broken: { cursor, why: "the record that was signed is not kept" } };
    if (recordHash(json) !== handover.hash) {
      return { records, broken: { cursor, why: "the record no longer fits the hash that was signed: it was changed" } };
    }
    records++;
  }
  return { records };
}
