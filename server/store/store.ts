import type { WantedProperty } from "../../core/handover/index.ts";
import type { StreamState } from "../../core/judging/index.ts";
import type { KeptLimits, LimitProposal, LimitSet } from "../../core/limit-set/index.ts";
import type {
  AxisSpec,
  Excursion,
  Judged,
  LabIdentity,
  LabResult,
  Quality,
  RecordedEvent,
  Refusals,
  ShiftRecord,
  StreamAccount,
  Trend,
} from "../../core/messages/index.ts";
import type { RecordedStretch } from "../../core/rehearsal/index.ts";
import type { FrozenRecord, HandoverBook, HandoverReader } from "./handover-store.ts";

/** One judged reading as it goes on record, with the spectrum as it was received. */
export interface NewReading {
  judged: Judged;
  receivedAt: number;
  late: boolean;
  /** brought in by a load, not live */
  history: boolean;
  /** time of the reading before the gap that this one ends */
  gapFrom: number | null;
  values: Float64Array;
  /** the axis it came with; absent: the model's */
  axis?: AxisSpec;
  quality?: Quality;
  context?: Record<string, number | string>;
}

export interface NewRefusal {
  /** null when no stream of ours is named */
  stream: string | null;
  topic: string;
  receivedAt: number;
  reason: string;
  says: string;
  payload: Uint8Array;
}

/** Everything that one commit makes durable, or nothing of it. */
export interface Changes {
  readings: NewReading[];
  refusals: NewRefusal[];
  events: RecordedEvent[];
  /** Label and notes of one that is on record stay when they are not given: people put them there, and a later reading must not take them away. */
  excursions: Excursion[];
  /** by stream: what judging remembers after these readings */
  states: Map<string, StreamState>;
  /** new versions, in force from here on */
  limitSets?: LimitSet[];
  /** records of shifts that were signed, each with the number of its signature */
  shiftRecords?: { record: FrozenRecord; number: number }[];
  /** new versions: those before stay on record */
  labResults?: LabResult[];
  /** limits under consideration; null takes away what was kept under the name */
  keptLimits?: { stream: string; name: string; kept: KeptLimits | null }[];
}

/** The record, as its single writer sees it. What a method is asked must be portable: no maker's own words cross this border. */
export interface StoreWriter {
  /** Durable when it returns: found again after a power cut. All of it or, if it throws, none. */
  commit(changes: Changes): void;
  /** What judging remembered at the last commit; undefined for a stream that has never been judged. */
  state(stream: string): StreamState | undefined;
  isRecorded(stream: string, time: number, sequence: number): boolean;
  excursion(id: string): Excursion | undefined;
  /** Readings of `from` ≤ time ≤ `to`, in order: for a handful around a moment. */
  readingsBetween(stream: string, from: number, to: number): StoredReading[];
  /** The newest version of a laboratory result. */
  labResult(stream: string, identity: LabIdentity): LabResult | undefined;
  /** The largest cursor on record; 0 for an empty one. */
  lastCursor(): number;
  /** The newest version of a stream's limit set. */
  limitSet(stream: string): LimitSet | undefined;
  addLimitSet(set: LimitSet): void;
  /** Keeps the text of a model under its identity; one that is known is left alone. */
  addModel(model: { id: string; name: string; properties: string[]; text: string }): void;
  /** The text of a model that is on record. */
  modelText(id: string): string | undefined;
  /**
   * Removes spectra of readings from before `before` that lie in no excursion; their results stay. Goes through at most `most` readings of
   * the stream and says whether there are more.
   */
  retireSpectra(stream: string, before: number, most: number): boolean;
  /** What people wrote to the records of shifts. Entries go in with their events. */
  handover: HandoverBook;
  /** Time of the stream's first reading that came in live. */
  firstLive(stream: string): number | undefined;
  close(): void;
}

export interface StoredReading {
  judged: Judged;
  receivedAt: number;
  late: boolean;
  history: boolean;
  /** null when the spectrum is no longer kept */
  values: Float64Array | null;
  axis?: AxisSpec;
}

export interface RecordedSpectrum {
  time: number;
  values: Float64Array | null;
  axis?: AxisSpec;
}

/** The record, as everybody else sees it: reads only, beside the running writer. */
export interface StoreReader {
  /** The last reading at or before `at` (before it, with `strictly`). */
  readingBefore(stream: string, at: number, strictly?: "strictly"): StoredReading | undefined;
  /** At most `most` readings after the one that is named and before `to`, in order of time and sequence: a page of the record. */
  readingsAfter(stream: string, after: { time: number; sequence: number }, to: number, most: number): StoredReading[];
  /** Time of the first reading after `at`. */
  timeAfter(stream: string, at: number): number | undefined;
  /** The trend of `from` ≤ time < `to` in at most about `points` intervals; each reading whole where there are no more than that. */
  trend(stream: string, properties: readonly string[], from: number, to: number, points: number): Trend;
  refusals(stream: string | undefined, limit: number): Refusals;
  /** The statistics of `from` ≤ time < `to` as columns, for a rehearsal; late readings, which alarms take no notice of, are left out. */
  stretch(stream: string, from: number, to: number): RecordedStretch;
  /** The spectra of the same readings, in the same order; null where one is no longer kept. */
  spectra(stream: string, from: number, to: number): Iterable<RecordedSpectrum>;
  /** Newest first; `about`: the first word of their kind; `after`: only those with a larger cursor. */
  events(query: { stream?: string; about?: string; after?: number; before?: number; limit: number }): RecordedEvent[];
  /** Every event of `from` ≤ at < `to`, in the order of the record, one by one. */
  everyEvent(from: number, to: number): Iterable<RecordedEvent>;
  /** The names of what was ever predicted of the stream. */
  propertiesRecorded(stream: string): string[];
  /** What happened to alarms at `from` ≤ time < `to`, in the order of the record; without what recorded history brought in, unless asked for. */
  alarmEvents(query: { from: number; to: number; history: boolean }): RecordedEvent[];
  /** Newest first, those that touch `from`–`to`. */
  /** Beginnings of the last excursion before `at` and of the first after it; null where there is none. */
  excursionsBeside(stream: string, at: number): { previous: number | null; next: number | null };
  excursions(query: { stream?: string; from?: number; to?: number; limit: number }): Excursion[];
  /** The newest versions of the results whose samples were drawn at `from` ≤ time < `to`, newest sample first; withdrawn ones, too. */
  labResults(query: { stream: string; property?: string; from: number; to: number }): LabResult[];
  limitSet(stream: string, version?: number): LimitSet | undefined;
  /** Every version, newest first. */
  limitSets(stream: string): LimitSet[];
  /** Limits under consideration, newest first. */
  keptLimits(stream: string): KeptLimits[];
  /** What waits for approval. */
  proposals(stream: string): LimitProposal[];
  modelText(id: string): string | undefined;
  /** A stream's time of `from` ≤ time < `to`; `gapMs`: after so long without a reading there is no data. */
  account(
    stream: string,
    of: { wanted: readonly WantedProperty[]; from: number; to: number; gapMs: number },
  ): StreamAccount;
  /** All but those of alarms, of `from` ≤ time < `to`, in the order of the record. */
  eventsBetween(from: number, to: number): RecordedEvent[];
  /** Of one kind, of `from` ≤ time < `to`, in the order of the record. */
  eventsOfKind(kind: string, from: number, to: number): RecordedEvent[];
  /** The last of one kind about a stream before `before`, by its time. */
  lastEvent(kind: string, stream: string, before: number): RecordedEvent | undefined;
  /** Messages that were refused, by stream and reason. One that came again and again counts as often, also where it began earlier. */
  refusedBetween(from: number, to: number): ShiftRecord["refused"];
  handover: HandoverReader;
  /** How many readings of the stream are on record, and the time of the first. */
  extent(stream: string): { readings: number; first: number | null };
  close(): void;
}
