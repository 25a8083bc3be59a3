import { openInboxForWriting } from "./inbox-store.ts";

interface Pending {
  topic: string;
  payload: Uint8Array;
  received: number;
  settle: (error?: Error) => void;
}

/** Called back when the message is on the disk, or with the error that kept it from there. */
export type Kept = (error?: Error) => void;

/**
 * The embedded broker's inbox: keeps a message on disk before its publisher is answered. All messages that arrive in one turn of the event
 * loop share one transaction (group commit).
 */
export class Inbox {
  readonly #db;
  readonly #insert;
  readonly #remove;
  readonly #onKept: (last: number) => void;
  #pending: Pending[] = [];
  #drained = 0;
  #removed = 0;
  #last = 0;

  /** `onKept` hears the number of the newest message after each commit. */
  constructor(file: string, onKept: (last: number) => void) {
    this.#db = openInboxForWriting(file);
    this.#insert = this.#db.prepare("INSERT INTO message (topic, received, payload) VALUES (?, ?, ?)");
    this.#remove = this.#db.prepare("DELETE FROM message WHERE n <= ?");
    this.#onKept = onKept;
  }

  keep(topic: string, payload: Uint8Array, received: number, kept: Kept): void {
    this.#pending.push({ topic, payload, received, settle: kept });
    if (this.#pending.length === 1) setImmediate(() => this.#commit());
  }

  /** The engine has everything up to and including `n` on record: with the next commit those rows go. */
  drainedUpTo(n: number): void {
    this.#drained = Math.max(this.#drained, n);
    // No traffic, no commit: then the rows go now and then by themselves.
    if (this.#pending.length === 0 && this.#drained - this.#removed >= 100) this.#commit();
  }

  close(): void {
    this.#commit();
    this.#db.close();
  }

  #commit(): void {
    const batch = this.#pending;
    this.#pending = [];
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
    for (const { settle } of batch) settle();
    if (batch.length > 0) this.#onKept(this.#last);
  }
}
