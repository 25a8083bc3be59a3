import type { EntryOf, HandoverEntry, RecordedEvent } from "../../core/messages/index.ts";

/** A shift's record as the outgoing side signed it; `json` is its canonical form, whose SHA-256 is `hash`. */
export interface FrozenRecord {
  hash: string;
  /** beginning of the shift, and until when the record tells; epoch ms */
  shift: number;
  to: number;
  json: string;
}

/** What people wrote to the records of shifts, as both the single writer and everybody else see it. */
export interface HandoverBook {
  /** Of one shift, in the order of their numbers. */
  entries(shift: number): HandoverEntry[];
  entry(number: number): HandoverEntry | undefined;
  /** What closed an action. */
  closing(action: number): EntryOf<"action closed"> | undefined;
  /** Time of the entry with the largest number; 0 for an empty book. */
  lastAt(): number;
}

export interface HandoverReader extends HandoverBook {
  /** Actions of a shift, whenever they were written, and of others, written before `to`, that were not closed before `from`. */
  actions(of: {
    shift: number;
    from: number;
    to: number;
  }): { action: EntryOf<"action">; closed: EntryOf<"action closed"> | undefined }[];
  frozen(hash: string): FrozenRecord | undefined;
  /** Until when the last signed record of a shift tells; undefined where nobody has signed. */
  frozenTo(shift: number): number | undefined;
  /** The shifts that began in `from` ≤ time < `to` and have entries, with those of them that are signatures. */
  signatures(from: number, to: number): EntryOf<"signature">[];
  /**
   * What people said, anywhere in the record, that has all these words (or words that begin so): newest first, and how many there are.
   */
  said(words: string, limit: number): { events: RecordedEvent[]; count: number };
}
