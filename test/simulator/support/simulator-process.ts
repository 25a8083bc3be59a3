import { type ChildProcessWithoutNullStreams, spawn } from "node:child_process";
import { join } from "node:path";

/** The command line as it is built: `npm test` builds first. */
const main = join(import.meta.dirname, "../../../dist/simulator/main.js");

export interface Ended {
  code: number | null;
  out: Buffer;
  err: string;
}

/** The simulator in a process of its own; `ended` resolves when it has ended and its output is all there. */
export function startSimulator(...args: string[]): { child: ChildProcessWithoutNullStreams; ended: Promise<Ended> } {
  const child = spawn(process.execPath, [main, ...args]);
  const out: Buffer[] = [];
  const err: Buffer[] = [];
  child.stdout.on("data", (piece: Buffer) => out.push(piece));
  child.stderr.on("data", (piece: Buffer) => err.push(piece));
  const ended = new Promise<Ended>((resolve, reject) => {
    child.on("close", (code) => resolve({ code, out: Buffer.concat(out), err: Buffer.concat(err).toString() }));
    child.on("error", reject);
  });
  return { child, ended };
}

export function simulator(...args: string[]): Promise<Ended> {
  return startSimulator(...args).ended;
}
