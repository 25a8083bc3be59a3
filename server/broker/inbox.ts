import { openInboxForWriting } from "./inbox-store.ts";

interface Pending {
  topic: string;
  payload: Uint8Array;
  /** wall clock, epoch ms */
  received: number;
  /** by the clock that nobody sets, ms */
  since: number;
  settle: (error?: Error) => void;
}

/** Called back when the message is on the disk, or with the error that kept it from there. */
export type Kept = (error?: Error) => void;

/** Messages that wait for the engine, on disk. Some hundred thousand readings: hours in which the record could not be written. */
const mostWaitingBytes = 1024 * 1024 * 1024;
/** How long a publisher is held before it is cut off, so that it comes again later and holds no memory here meanwhile. */
const holdMs = 10_000;

export interface InboxState {
  /** bytes of the messages that wait on disk for the engine */
  bytes: number;
  /** messages in memory, not yet kept and not answered */
  held: number;
}

/**
 * The embedded broker's inbox: keeps a message on disk before its publisher is answered. All messages that arrive in one turn of the event
 * loop share one transaction (group commit).
 *
 * Its size is bounded: while `mostBytes` wait for the engine nothing more is kept, so no publisher is answered, so none sends more than it
 * may have in flight. That is all the back-pressure that MQTT 3.1.1 knows.
 */
export class Inbox {
  readonly #db;
  readonly #insert;
  readonly #remove;
  readonly #onKept: (last: number) => void;
  readonly #mostBytes: number;
  #pending: Pending[] = [];
  #scheduled = false;
  #drained = 0;
  #removed = 0;
  #last = 0;
  /** what the messages of each commit that still waits weigh, oldest first */
  #waiting: { last: number; bytes: number }[] = [];
  #bytes = 0;
  readonly #givingUp: NodeJS.Timeout;

  /** `onKept` hears the number of the newest message after each commit. */
  constructor(file: string, onKept: (last: number) => void, { mostBytes = mostWaitingBytes } = {}) {
    this.#db = openInboxForWriting(file);
    this.#insert = this.#db.prepare("INSERT INTO message (topic, received, payload) VALUES (?, ?, ?)");
    this.#remove = this.#db.prepare("DELETE FROM message WHERE n <= ?");
    this.#onKept = onKept;
    this.#mostBytes = mostBytes;
    const left = this.#db
      .prepare<[], { last: number; bytes: number }>(
        "SELECT coalesce(max(n), 0) AS last, coalesce(sum(length(payload)), 0) AS bytes FROM message",
      )
      .get()!;
    this.#weigh(left.last, left.bytes);
    this.#givingUp = setInterval(() => this.#giveUp(performance.now() - holdMs), 1000);
  }

  keep(topic: string, payload: Uint8Array, received: number, kept: Kept): void {
    this.#pending.push({ topic, payload, received, since: performance.now(), settle: kept });
    this.#schedule();
  }

  /** The engine has everything up to and including `n` on record: with the next commit those rows go. */
  drainedUpTo(n: number): void {
    this.#drained = Math.max(this.#drained, n);
    while (this.#waiting.length > 0 && this.#waiting[0].last <= this.#drained) {
      this.#bytes -= this.#waiting.shift()!.bytes;
    }
    // No traffic, no commit: then the rows go now and then by themselves.
    if (this.#pending.length > 0 || this.#drained - this.#removed >= 100) this.#schedule();
  }

  get state(): InboxState {
    return { bytes: this.#bytes, held: this.#pending.length };
  }

  close(): void {
    clearInterval(this.#givingUp);
    this.#commit();
    this.#db.close();
  }

  #schedule(): void {
    if (this.#scheduled) return;
    this.#scheduled = true;
    setImmediate(() => {
      this.#scheduled = false;
      if (this.#db.open) this.#commit();
    });
  }

  #commit(): void {
    const batch = this.#bytes < this.#mostBytes ? this.#pending : [];
    if (batch.length === 0 && this.#drained === this.#removed) return;
    if (batch.length > 0) this.#pending = [];
    try {
      this.#db.transaction(() => {
        for (const { topic, received, payload } of batch) {
          this.#last = Number(this.#insert.run(topic, received, payload).lastInsertRowid);
        }
        if (this.#drained > this.#removed) this.#remove.run(this.#drained);
      })();
    } catch (error) {
      // Not kept, so not acknowledged: the publisher is cut off and sends again.
      for (const { settle } of batch) settle(error as Error);
      return;
    }
    this.#removed = this.#drained;
    this.#weigh(
      this.#last,
      batch.reduce((sum, { payload }) => sum + payload.length, 0),
    );
    for (const { settle } of batch) settle();
    if (batch.length > 0) this.#onKept(this.#last);
  }

  #weigh(last: number, bytes: number): void {
    if (bytes === 0) return;
    this.#waiting.push({ last, bytes });
    this.#bytes += bytes;
  }

  #giveUp(before: number): void {
    const late = this.#pending.filter(({ since }) => since < before);
    if (late.length === 0) return;
    this.#pending = this.#pending.filter(({ since }) => since >= before);
    for (const { settle } of late) settle(new Error("the inbox is full: the engine is behind"));
  }
}
