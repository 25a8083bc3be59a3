import { join, resolve } from "node:path";
import { Command } from "commander";
import { readPlantConfig } from "../config/plant-config.ts";
import { backupRecord } from "../store/sqlite/backup.ts";

/** `backup`: a consistent copy of the record, also while the service runs. */
export function backupCommand(): Command {
  return new Command("backup")
    .description("copy the record of a plant to a file, also while the service runs; the copy is checked")
    .requiredOption("--config <file>", "the plant's configuration")
    .requiredOption("--to <file>", "the copy; a new file")
    .option("--json", "print the outcome as JSON")
    .addHelpText(
      "after",
      "\nTo restore: stop the service, move record.db, record.db-wal and record.db-shm of the data folder aside, put the copy there as record.db, and start.",
    )
    .action(async ({ config: file, to, json }: { config: string; to: string; json?: boolean }) => {
      const { data } = readPlantConfig(file);
      const target = resolve(to);
      const { megabytes } = await backupRecord(join(data, "record.db"), target);
      if (json) console.log(JSON.stringify({ file: target, megabytes }));
      else console.log(`${target}: ${megabytes.toFixed(1)} MB, checked. Everything on record when it began is in it.`);
    });
}
