#!/usr/bin/env node
import { Command, CommanderError } from "commander";
import { MillraceError } from "../core/errors.ts";
import { calibrationCommand } from "./commands/calibration.ts";
import { historyCommand } from "./commands/history.ts";
import { runCommand } from "./commands/run.ts";
import { UsageError } from "./commands/simulator-error.ts";

const program = new Command("millrace-simulator").description(
  "Brindle Quay, a solvent recovery works that does not exist: three lines with an inline analyzer each",
);
for (const command of [calibrationCommand(), historyCommand(), runCommand()]) program.addCommand(command);
// Set after the commands are added: a command made apart does not inherit it.
for (const command of [program, ...program.commands]) command.exitOverride();

// A reader that closes our pipe has had enough: no error of ours.
process.stdout.on("error", (error: NodeJS.ErrnoException) => {
  if (error.code === "EPIPE") process.exit(0);
  throw error;
});

try {
  await program.parseAsync();
} catch (error) {
  process.exitCode = exitCodeOf(error);
}

function exitCodeOf(error: unknown): number {
  // commander has printed its own
  if (error instanceof CommanderError) return error.exitCode === 0 ? 0 : 2;
  if (!(error instanceof MillraceError)) throw error;
  process.stderr.write(`${error.message}\n`);
  return error instanceof UsageError ? 2 : 1;
}
