import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { gasolineFile } from "../reference/gasoline.ts";

/** The gasoline spectra as two tables in a folder of their own: rows 1–50 to fit, 51–60 to predict. */
export function gasolineFiles() {
  const folder = mkdtempSync(join(tmpdir(), "millrace-commands-"));
  const [header, ...rows] = readFileSync(gasolineFile, "utf8").trim().split("\n");
  const table = (name: string, lines: string[]) => {
    const file = join(folder, name);
    writeFileSync(file, `${[header, ...lines].join("\n")}\n`);
    return file;
  };
  return {
    header,
    rows,
    table,
    calibration: table("calibration.csv", rows.slice(0, 50)),
    test: table("test.csv", rows.slice(50)),
    path: (name: string) => join(folder, name),
    remove: () => rmSync(folder, { recursive: true }),
  };
}
