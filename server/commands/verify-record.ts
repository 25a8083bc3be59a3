import { join } from "node:path";
import { Command } from "commander";
import { MillraceError } from "../../core/errors.ts";
import { readPlantConfig } from "../config/plant-config.ts";
import { verifyChain } from "../store/sqlite/event-chain.ts";
import { openForReading } from "../store/sqlite/open.ts";
import { verifySignedRecords } from "../store/sqlite/signed-records.ts";

class BrokenRecordError extends MillraceError {
  readonly code = "broken-record";
}

/** `verify-record`: is the trail of events whole? The service may run meanwhile. */
export function verifyRecordCommand(): Command {
  return new Command("verify-record")
    .description(
      "check that no event on record was changed or taken out, nor a signed record of a shift, and name the first that was",
    )
    .requiredOption("--config <file>", "the plant's configuration")
    .option("--json", "print as JSON")
    .action(({ config: file, json }: { config: string; json?: boolean }) => {
      const { data } = readPlantConfig(file);
      const db = openForReading(join(data, "record.db"));
      const outcome = verifyChain(db);
      const signed = verifySignedRecords(db);
      db.close();
      if (json) console.log(JSON.stringify({ ...outcome, signed }));
      const { broken, events, head } = outcome;
      if (broken) {
        throw new BrokenRecordError(
          `event ${broken.cursor}: ${broken.why}. The ${events} events before it are whole. Compare with a backup, and find out who had access.`,
        );
      }
      if (signed.broken) {
        throw new BrokenRecordError(
          `signature ${signed.broken.cursor}: ${signed.broken.why}. Compare with a backup, and find out who had access.`,
        );
      }
      if (json) return;
      console.log(`${events} events, whole; the last has the hash ${head}`);
      if (signed.records > 0) console.log(`${signed.records} signed records of shifts, each as it was signed`);
    });
}
