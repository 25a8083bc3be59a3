import { Worker } from "node:worker_threads";
import type { RehearsalResult, SweepCell } from "../../core/rehearsal/index.ts";
import type { Progress, RehearsalJob } from "./rehearser.ts";
import { RehearsalError } from "./rehearser.ts";
import type { FromRehearser, ToRehearser } from "./worker.ts";

interface Hearing {
  progress: Progress;
  cell: (cell: SweepCell) => void;
}
interface Running extends Hearing {
  resolve: (result: RehearsalResult | undefined) => void;
  reject: (error: Error) => void;
}

/** One thread that rehearses, one job at a time; it keeps the stretch that it read last. Ends when it was not asked for a while. */
export class RehearsalThread {
  readonly #recordFile: string;
  #worker: Worker | undefined;
  #running: Running | undefined;
  #idle: ReturnType<typeof setTimeout> | undefined;

  constructor(recordFile: string) {
    this.#recordFile = recordFile;
  }

  /** @throws RehearsalError what kept it from an answer, for people */
  ask(kind: ToRehearser["kind"], job: RehearsalJob, hearing: Hearing): Promise<RehearsalResult | undefined> {
    clearTimeout(this.#idle);
    const worker = this.#started();
    return new Promise((resolve, reject) => {
      this.#running = { ...hearing, resolve, reject };
      worker.postMessage({ kind, job } satisfies ToRehearser);
    });
  }

  /** Ends what runs, if anything does; the next job starts a new thread. */
  async stop(why = "the service stops"): Promise<void> {
    clearTimeout(this.#idle);
    const worker = this.#worker;
    this.#worker = undefined;
    this.#settle(({ reject }) => reject(new RehearsalError(why)));
    await worker?.terminate();
  }

  #started(): Worker {
    if (this.#worker) return this.#worker;
    const worker = new Worker(new URL("./worker.js", import.meta.url), {
      workerData: { recordFile: this.#recordFile },
    });
    worker.on("message", (message: FromRehearser) => this.#heard(message));
    worker.on("error", (error) => {
      this.#worker = undefined;
      this.#settle(({ reject }) => reject(new RehearsalError(`The rehearsal's thread failed: ${error.message}`)));
    });
    this.#worker = worker;
    return worker;
  }

  #heard(message: FromRehearser): void {
    switch (message.kind) {
      case "progress":
        this.#running?.progress(message.doing, message.done, message.total);
        break;
      case "cell":
        this.#running?.cell(message.cell);
        break;
      case "done":
        this.#settle(({ resolve }) => resolve(message.result));
        break;
      case "failed":
        this.#settle(({ reject }) => reject(new RehearsalError(message.says)));
        break;
      default:
        message satisfies never;
    }
  }

  #settle(settle: (running: Running) => void): void {
    const running = this.#running;
    this.#running = undefined;
    if (running) settle(running);
    if (this.#worker) this.#idle = setTimeout(() => void this.stop(), idleMs).unref();
  }
}

/** What it keeps of a long stretch is some hundred megabytes; nobody who tunes limits thinks longer than this between two changes. */
const idleMs = 300_000;
