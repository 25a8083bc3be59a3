import { verdictMask, worstOfMask } from "../../core/messages/index.ts";
import type { Changes, StoreWriter } from "../store/store.ts";

/** How often something with these labels happened. */
export interface Count {
  labels: Record<string, string>;
  count: number;
}

/** What went on record since the last account. Plain data: it crosses from the engine's thread to the gateway. */
export interface Account {
  /** by stream and worst verdict */
  readings: Count[];
  /** by stream ("" where none of ours was named) and reason */
  refusals: Count[];
  /** by kind */
  events: Count[];
  /** how long each commit took, s */
  commits: number[];
  failedCommits: number;
}

/** Counts what the engine's single writer puts on record, and how long it takes: the record itself is the measure, not what was meant to be. */
export class Meter {
  readonly store: StoreWriter;
  #readings = new Tally();
  #refusals = new Tally();
  #events = new Tally();
  #commits: number[] = [];
  #failedCommits = 0;

  constructor(store: StoreWriter) {
    this.store = { ...store, commit: (changes) => this.#commit(store, changes) };
  }

  /** The account since the last call. */
  account(): Account {
    const account = {
      readings: this.#readings.counts(),
      refusals: this.#refusals.counts(),
      events: this.#events.counts(),
      commits: this.#commits,
      failedCommits: this.#failedCommits,
    };
    this.#readings = new Tally();
    this.#refusals = new Tally();
    this.#events = new Tally();
    this.#commits = [];
    this.#failedCommits = 0;
    return account;
  }

  #commit(store: StoreWriter, changes: Changes): void {
    const began = performance.now();
    try {
      store.commit(changes);
    } catch (error) {
      this.#failedCommits++;
      throw error;
    }
    this.#commits.push((performance.now() - began) / 1000);
    for (const { judged, history } of changes.readings) {
      const verdict = worstOfMask(verdictMask(judged.verdict)) ?? "unusable";
      this.#readings.add({ stream: judged.stream, verdict, origin: history ? "load" : "live" });
    }
    for (const { stream, reason } of changes.refusals) this.#refusals.add({ stream: stream ?? "", reason });
    for (const { kind } of changes.events) this.#events.add({ kind });
  }
}

class Tally {
  readonly #counts = new Map<string, Count>();

  add(labels: Record<string, string>): void {
    const name = Object.values(labels).join("\0");
    const known = this.#counts.get(name);
    if (known) known.count++;
    else this.#counts.set(name, { labels, count: 1 });
  }
  counts(): Count[] {
    return [...this.#counts.values()];
  }
}
