import { type Command, CommanderError } from "commander";
import { vi } from "vitest";

/** What a command left behind: what it printed, and the error it threw, if it did. */
export interface Ran {
  out: string;
  err: string;
  error: unknown;
}

/** Runs a command in this process with the words of a command line. Usage errors come as CommanderError, others as they were thrown. */
export async function runCommand(command: Command, words: readonly string[]): Promise<Ran> {
  const printed = { out: "", err: "" };
  const keep = (into: "out" | "err") => (text: string | Uint8Array) => {
    printed[into] += String(text);
    return true;
  };
  const spies = [
    vi.spyOn(process.stdout, "write").mockImplementation(keep("out")),
    vi.spyOn(process.stderr, "write").mockImplementation(keep("err")),
  ];
  try {
    await command.exitOverride().parseAsync([...words], { from: "user" });
    return { ...printed, error: undefined };
  } catch (error) {
    return { ...printed, error };
  } finally {
    for (const spy of spies) spy.mockRestore();
  }
}

export function isUsageError(error: unknown): boolean {
  return error instanceof CommanderError && error.exitCode !== 0;
}
