import { writeFileSync } from "node:fs";
import { cpus } from "node:os";
import type { BenchResult } from "./bench-result.ts";
import { benchHandover } from "./handover.ts";
import { benchIngest } from "./ingest.ts";
import { benchRehearse } from "./rehearse.ts";
import { benchScore } from "./score.ts";
import { benchScreens } from "./screens.ts";
import { benchYear } from "./year.ts";

/** Every bench, one after the other: first a table for people, then one line of JSON, which goes to dist/bench.json, too. Ratios within one run; times depend on the machine. */
const benches: Record<string, () => BenchResult[] | Promise<BenchResult[]>> = {
  score: benchScore,
  year: benchYear,
  handover: benchHandover,
  rehearse: benchRehearse,
  ingest: benchIngest,
  screens: benchScreens,
};

const asked = process.argv.slice(2);
const results: Record<string, BenchResult[]> = {};
for (const [name, bench] of Object.entries(benches)) {
  if (asked.length > 0 && !asked.includes(name)) continue;
  results[name] = await bench();
  for (const { name: line, value, unit, wanted, good, note } of results[name]) {
    const verdict = good === undefined ? "" : good ? "  as wanted" : "  NOT AS WANTED";
    console.log(
      `${line.padEnd(52)} ${value.toPrecision(3).padStart(9)} ${unit.padEnd(6)}${wanted ? ` (wanted: ${wanted})` : ""}${verdict}${note ? `  ${note}` : ""}`,
    );
  }
}
const json = JSON.stringify({ node: process.version, cpu: cpus()[0]?.model, results });
console.log(json);
writeFileSync(new URL("../../bench.json", import.meta.url), `${json}\n`);
