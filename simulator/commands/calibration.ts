import { mkdir, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { Command } from "commander";
import {
  calibrationCsv,
  calibrationSet,
  defaultSeed,
  makePlant,
  type SetKind,
  streamIds,
  streamPlans,
} from "../plant/index.ts";
import { seedNumber } from "./options.ts";
import { SimulatorError } from "./simulator-error.ts";

export function calibrationCommand(): Command {
  return new Command("calibration")
    .description(
      "write the invented calibration tables: <stream>.calibration.csv and the held-out <stream>.validation.csv",
    )
    .requiredOption("--out <folder>", "where to (it is made where it is missing)")
    .option("--seed <number>", "another plant, another number", seedNumber, defaultSeed)
    .action(async ({ out, seed }: { out: string; seed: number }) => {
      const plant = makePlant(seed);
      try {
        await mkdir(out, { recursive: true });
        for (const stream of streamIds) {
          for (const kind of ["calibration", "validation"] satisfies SetKind[]) {
            const text = calibrationCsv(streamPlans[stream], calibrationSet(plant, stream, kind));
            await writeFile(join(out, `${stream}.${kind}.csv`), text);
          }
        }
      } catch (cause) {
        throw new SimulatorError(
          `--out ${out} can't be written: ${(cause as Error).message}. Name a folder that can.`,
          { cause },
        );
      }
    });
}
