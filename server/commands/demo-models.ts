import { spawn } from "node:child_process";
import { mkdirSync } from "node:fs";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { endOf, spawnSimulator } from "./simulator-process.ts";

/** How the invented plant's chemometrician calibrates each stream. */
const calibrations = [
  { stream: "bq-201", properties: ["ethanol", "water"], steps: "savitzky-golay 15 2 1; center" },
  { stream: "bq-305", properties: ["ethyl acetate", "ethanol", "water"], steps: "savitzky-golay 15 2 1; center" },
  { stream: "bq-410", properties: ["water"], steps: "snv; savitzky-golay 15 2 1; center" },
];

/** The demo's models are made by the product itself: the simulator writes invented tables, `calibrate` fits them, with a report each. */
export async function makeDemoModels(folder: string): Promise<void> {
  const tables = join(folder, "calibration");
  mkdirSync(tables, { recursive: true });
  await endOf(spawnSimulator(["calibration", "--out", tables], "inherit"), "the simulator's calibration tables");
  await Promise.all(calibrations.map((calibration) => calibrate(calibration, tables, folder)));
}

async function calibrate(
  { stream, properties, steps }: (typeof calibrations)[number],
  tables: string,
  folder: string,
): Promise<void> {
  const main = fileURLToPath(new URL("../main.js", import.meta.url));
  const data = join(tables, `${stream}.calibration.csv`);
  const test = join(tables, `${stream}.validation.csv`);
  const out = join(folder, `${stream}.model.json`);
  const child = spawn(
    process.execPath,
    [
      ...[main, "calibrate", "--data", data, "--property", ...properties],
      ...properties.flatMap((name) => ["--unit", `${name}=wt%`]),
      ...["--steps", steps, "--components", "auto", "--most-components", "10", "--validate", "group"],
      ...["--test", test, "--out", out],
    ],
    { stdio: ["ignore", "ignore", "inherit"] },
  );
  await endOf(child, `calibrate for ${stream}`);
}
