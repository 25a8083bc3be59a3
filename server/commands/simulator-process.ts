import { type ChildProcess, spawn } from "node:child_process";
import { existsSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { MillraceError, mismatchSentence } from "../../core/errors.ts";

export class SimulatorProcessError extends MillraceError {
  readonly code = "simulator";
}

/** Starts the simulator in a process of its own: like any analyzer it is reached by MQTT only, so the server never imports it. */
export function spawnSimulator(args: readonly string[], stdio: "inherit" | "stdout"): ChildProcess {
  const program = fileURLToPath(new URL("../../simulator/main.js", import.meta.url));
  if (!existsSync(program)) {
    const mismatch = { got: "not there", expected: "the built simulator", todo: "Run 'npm run build' first." };
    throw new SimulatorProcessError(mismatchSentence(program, mismatch));
  }
  return spawn(process.execPath, [program, ...args], {
    stdio: ["ignore", stdio === "stdout" ? "pipe" : "inherit", "inherit"],
  });
}

/** Resolves when the process ends well. @throws SimulatorProcessError when it does not. */
export function endOf(child: ChildProcess, what: string): Promise<void> {
  return new Promise((resolve, reject) => {
    child.once("error", (cause) =>
      reject(new SimulatorProcessError(`${what} did not start: ${cause.message}`, { cause })),
    );
    child.once("exit", (code, signal) => {
      if (code === 0) resolve();
      else
        reject(
          new SimulatorProcessError(`${what} ended with ${signal ?? `exit code ${code}`}; its words stand above.`),
        );
    });
  });
}
