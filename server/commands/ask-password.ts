import { createInterface } from "node:readline";
import { Writable } from "node:stream";
import { PeopleError } from "../people/people-store.ts";

/** Typed at a terminal it is not shown; from a pipe it is the first line. @throws PeopleError when none came */
export async function askPassword(what = "password"): Promise<string> {
  const terminal = process.stdin.isTTY;
  if (terminal) process.stderr.write(`${what}: `);
  // What is typed is echoed to nowhere.
  const nowhere = new Writable({ write: (_chunk, _encoding, done) => done() });
  const lines = createInterface({ input: process.stdin, output: nowhere, terminal });
  try {
    for await (const line of lines) return line;
  } finally {
    lines.close();
    if (terminal) process.stderr.write("\n");
  }
  throw new PeopleError(`no ${what} came on standard input, expected one line.`);
}
