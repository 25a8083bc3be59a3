import { existsSync } from "node:fs";
import { type InboxRow, openInboxForReading } from "../broker/inbox-store.ts";
import type { MessageBatch, Source } from "./source.ts";

/** Of messages taken into memory at a time: thousands of spectra, but only four of the largest that are let in. */
const mostBytes = 16 * 1024 * 1024;

/** Takes messages from the embedded broker's inbox on disk, in their order; what the last run left there comes first. */
export class InboxSource implements Source {
  readonly #db;
  readonly #rows;
  readonly #count;
  readonly #drained: (n: number) => void;
  #done = 0;

  /** `drained` tells the inbox's owner which messages it may delete. @throws when the file is not there: the broker makes it first. */
  constructor(file: string, drained: (n: number) => void) {
    if (!existsSync(file))
      throw new Error(`${file} is not there; the embedded broker makes it before the engine starts`);
    this.#db = openInboxForReading(file);
    this.#rows = this.#db.prepare<[number, number], InboxRow>("SELECT * FROM message WHERE n > ? ORDER BY n LIMIT ?");
    this.#count = this.#db.prepare<[number], { count: number; oldest: number | null }>(
      "SELECT count(*) AS count, min(received) AS oldest FROM message WHERE n > ?",
    );
    this.#drained = drained;
  }

  take(most: number): MessageBatch | undefined {
    const rows: InboxRow[] = [];
    let bytes = 0;
    for (const row of this.#rows.iterate(this.#done, most)) {
      rows.push(row);
      bytes += row.payload.length;
      if (bytes >= mostBytes) break;
    }
    if (rows.length === 0) return undefined;
    const last = rows[rows.length - 1].n;
    return {
      messages: rows.map(({ topic, payload, received }) => ({ topic, payload, receivedAt: received })),
      acknowledge: () => {
        this.#done = last;
        this.#drained(last);
      },
    };
  }

  waiting(): { count: number; oldest: number | undefined } {
    const { count, oldest } = this.#count.get(this.#done)!;
    return { count, oldest: oldest ?? undefined };
  }

  connected(): boolean {
    return true; // the broker is part of this service
  }

  async close(): Promise<void> {
    this.#db.close();
  }
}
