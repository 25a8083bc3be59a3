#!/usr/bin/env node
import { Command, CommanderError } from "commander";
import { MillraceError } from "../core/errors.ts";
import { backupCommand } from "./commands/backup.ts";
import { calibrateCommand } from "./commands/calibrate.ts";
import { demoCommand } from "./commands/demo.ts";
import { exportCommand } from "./commands/export.ts";
import { handoverCommand } from "./commands/handover.ts";
import { importModelCommand } from "./commands/import-model.ts";
import { inspectCommand } from "./commands/inspect.ts";
import { labCommand } from "./commands/lab.ts";
import { loadCommand } from "./commands/load.ts";
import { publisherCommand } from "./commands/publisher.ts";
import { scoreCommand } from "./commands/score.ts";
import { serveCommand } from "./commands/serve.ts";
import { simulateCommand } from "./commands/simulate.ts";
import { userCommand } from "./commands/user.ts";
import { verifyRecordCommand } from "./commands/verify-record.ts";
import { version } from "./version.ts";

const program = new Command("millrace")
  .description(
    "Runs PLS calibration models on inline analyzer spectra: scores, judges, alarms, records and shows them.",
  )
  .version(version);
for (const command of [
  demoCommand(),
  serveCommand(),
  calibrateCommand(),
  inspectCommand(),
  importModelCommand(),
  scoreCommand(),
  labCommand(),
  loadCommand(),
  handoverCommand(),
  simulateCommand(),
  userCommand(),
  publisherCommand(),
  backupCommand(),
  exportCommand(),
  verifyRecordCommand(),
]) {
  program.addCommand(command);
}
// Set after the commands are added: a command made apart does not inherit it.
function overrideExit(command: Command): void {
  command.exitOverride();
  for (const below of command.commands) overrideExit(below);
}
overrideExit(program);

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

/** 1: something that a person must mend, said on stderr · 2: the command was called wrongly. A fault of ours keeps its trace. */
function exitCodeOf(error: unknown): number {
  if (error instanceof CommanderError) return error.exitCode === 0 ? 0 : 2; // commander has printed its own
  if (!(error instanceof MillraceError)) throw error;
  process.stderr.write(`${error.message}\n`);
  return 1;
}
