import { parentPort, workerData } from "node:worker_threads";
import { MillraceError } from "../../core/errors.ts";
import type { RehearsalResult, SweepCell } from "../../core/rehearsal/index.ts";
import { sqliteReader } from "../store/sqlite/reader.ts";
import { type RehearsalJob, Rehearser } from "./rehearser.ts";

export type ToRehearser = { kind: "run" | "sweep"; job: RehearsalJob };
export type FromRehearser =
  | { kind: "progress"; doing: string; done: number; total: number }
  | { kind: "cell"; cell: SweepCell }
  | { kind: "done"; result?: RehearsalResult }
  | { kind: "failed"; says: string };

const port = parentPort!;
const rehearser = new Rehearser(sqliteReader((workerData as { recordFile: string }).recordFile));
const say = (message: FromRehearser) => port.postMessage(message);
const progress = (doing: string, done: number, total: number) => say({ kind: "progress", doing, done, total });

port.on("message", ({ kind, job }: ToRehearser) => {
  try {
    if (kind === "run") return say({ kind: "done", result: rehearser.run(job, progress) });
    for (const cell of rehearser.sweep(job, progress)) say({ kind: "cell", cell });
    say({ kind: "done" });
  } catch (error) {
    const says = error instanceof MillraceError ? error.message : `A fault of the rehearsal: ${(error as Error).stack}`;
    say({ kind: "failed", says });
  }
});
