import { randomUUID } from "node:crypto";
import { bestOf, type RehearsalResult, type RehearsalStanding, type SweepCell } from "../../core/rehearsal/index.ts";
import { RehearsalThread } from "./rehearsal-thread.ts";
import type { RehearsalJob } from "./rehearser.ts";

/** Two cores may rehearse; the engine has its own thread, and the gateway goes on. */
const threads = 2;
/** Answers are kept for whoever asked; older ones go. */
const mostKept = 50;
/** Work that waits for a thread; more than that is refused. */
const mostWaiting = 20;

interface Entry {
  job: RehearsalJob;
  standing: RehearsalStanding;
  startedAt: number;
  cancel: () => void;
}

/** Rehearsals that people asked for: each runs in a thread of its own, tells how far it is, and can be cancelled. */
export class Rehearsals {
  readonly #threads: RehearsalThread[];
  readonly #entries = new Map<string, Entry>();
  readonly #taken = new Set<RehearsalThread>();
  readonly #waiting: ((thread: RehearsalThread) => void)[] = [];

  constructor(recordFile: string) {
    this.#threads = Array.from({ length: threads }, () => new RehearsalThread(recordFile));
  }

  /** Starts one and returns its name; undefined when too many wait already. */
  start(job: RehearsalJob): string | undefined {
    if (this.#waiting.length >= mostWaiting) return undefined;
    const id = randomUUID();
    const standing: RehearsalStanding = {
      state: "running",
      doing: "waiting for a thread",
      done: 0,
      total: 1,
      restMs: null,
    };
    const entry: Entry = { job, standing, startedAt: Date.now(), cancel: () => {} };
    this.#entries.set(id, entry);
    for (const old of this.#entries.keys()) {
      if (this.#entries.size <= mostKept) break;
      this.#entries.get(old)?.cancel();
      this.#entries.delete(old);
    }
    void this.#run(entry);
    return id;
  }

  standing(id: string): RehearsalStanding | undefined {
    return this.#entries.get(id)?.standing;
  }

  /** What was asked for, and what came of it, once it is done. */
  finished(id: string): { job: RehearsalJob; result: RehearsalResult } | undefined {
    const entry = this.#entries.get(id);
    return entry?.standing.state === "done" ? { job: entry.job, result: entry.standing.result } : undefined;
  }

  /** False: there is none of that name. */
  cancel(id: string): boolean {
    const entry = this.#entries.get(id);
    if (entry?.standing.state === "running") {
      entry.standing = { state: "cancelled" };
      entry.cancel();
    }
    return entry !== undefined;
  }

  async stop(): Promise<void> {
    // What waits for a thread must not start one now.
    for (const id of this.#entries.keys()) this.cancel(id);
    await Promise.all(this.#threads.map((thread) => thread.stop()));
  }

  async #run(entry: Entry): Promise<void> {
    try {
      const result = await this.#inThread(entry, "run", entry.job, () => {});
      if (entry.standing.state !== "running") return;
      if (entry.job.request.sweep && result) result.sweep = await this.#sweep(entry);
      if (entry.standing.state === "running") entry.standing = { state: "done", result: result! };
    } catch (error) {
      if (entry.standing.state === "running") entry.standing = { state: "failed", says: (error as Error).message };
    }
  }

  /** Shared out over both threads: every second value of the first setting to each. */
  async #sweep(entry: Entry): Promise<NonNullable<RehearsalResult["sweep"]>> {
    const [first, second] = entry.job.request.sweep!;
    const total = first.values.length * (second?.values.length ?? 1);
    const cells: SweepCell[] = [];
    const startedAt = Date.now();
    const part = (offset: number) => {
      const values = first.values.filter((_, i) => i % threads === offset);
      const sweep = second ? [{ ...first, values }, second] : [{ ...first, values }];
      const job = { ...entry.job, request: { ...entry.job.request, sweep } };
      return this.#inThread(entry, "sweep", job, (cell) => {
        cells.push({ ...cell, x: cell.x * threads + offset });
        if (entry.standing.state !== "running") return;
        const restMs = ((Date.now() - startedAt) / cells.length) * (total - cells.length);
        entry.standing = { state: "running", doing: "sweeping", done: cells.length, total, restMs };
      });
    };
    await Promise.all(Array.from({ length: Math.min(threads, first.values.length) }, (_, offset) => part(offset)));
    cells.sort((a, b) => a.x - b.x || a.y - b.y);
    return { cells, best: bestOf(cells) };
  }

  async #inThread(
    entry: Entry,
    kind: "run" | "sweep",
    job: RehearsalJob,
    cell: (cell: SweepCell) => void,
  ): Promise<RehearsalResult | undefined> {
    const thread = await this.#free();
    if (entry.standing.state !== "running") {
      this.#release(thread);
      return undefined;
    }
    const before = entry.cancel;
    entry.cancel = () => {
      before();
      void thread.stop("cancelled");
    };
    try {
      return await thread.ask(kind, job, {
        cell,
        progress: (doing, done, total) => {
          if (entry.standing.state === "running")
            entry.standing = { state: "running", doing, done, total, restMs: null };
        },
      });
    } finally {
      entry.cancel = before;
      this.#release(thread);
    }
  }

  /** The first thread that has nothing to do; its neighbour is started only when both are needed. */
  #free(): Promise<RehearsalThread> {
    const idle = this.#threads.find((thread) => !this.#taken.has(thread));
    if (idle) {
      this.#taken.add(idle);
      return Promise.resolve(idle);
    }
    return new Promise((resolve) => this.#waiting.push(resolve));
  }

  #release(thread: RehearsalThread): void {
    const next = this.#waiting.shift();
    if (next) next(thread);
    else this.#taken.delete(thread);
  }
}
