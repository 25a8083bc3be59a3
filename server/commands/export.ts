import { join, resolve } from "node:path";
import { Command, InvalidArgumentError, Option } from "commander";
import { readPlantConfig } from "../config/plant-config.ts";
import { timeOf } from "../engine/decode.ts";
import { ExportError } from "../export/export-error.ts";
import { type ExportFormat, type ExportKind, exportKinds, exportLines } from "../export/lines.ts";
import { writeChecked } from "../export/write-checked.ts";
import { sqliteReader } from "../store/sqlite/reader.ts";

interface Options {
  config: string;
  what: ExportKind;
  format: ExportFormat;
  stream?: string;
  from: number;
  to: number;
  out: string;
  json?: boolean;
}

/** `export`: the record of a stretch as a file, with a check value; also while the service runs. */
export function exportCommand(): Command {
  return new Command("export")
    .description("write the record of a stretch to a file, with its SHA-256 beside it; also while the service runs")
    .requiredOption("--config <file>", "the plant's configuration")
    .addOption(new Option("--what <kind>", "what of the record").choices(exportKinds).makeOptionMandatory())
    .addOption(
      new Option("--format <format>", "a table, or one JSON object a line").choices(["csv", "ndjson"]).default("csv"),
    )
    .option("--stream <id>", "of one stream (default: of all)")
    .option(
      "--from <time>",
      "first moment, RFC 3339 with an offset or epoch milliseconds (default: the beginning)",
      timeOption,
      0,
    )
    .option("--to <time>", "first moment no more (default: now, and what follows)", timeOption, Number.MAX_SAFE_INTEGER)
    .requiredOption("--out <file>", "a new file; its check value goes to <file>.sha256")
    .option("--json", "print the outcome as JSON")
    .addHelpText(
      "after",
      "\nTimes are in UTC. Spectra as ndjson are what 'load' takes.\nTo check a file later: sha256sum --check FILE.sha256",
    )
    .action(run);
}

async function run({ config: file, what, format, stream, from, to, out, json }: Options): Promise<void> {
  const { data, streams } = readPlantConfig(file);
  const ids = streams.map(({ id }) => id);
  if (stream !== undefined && !ids.includes(stream))
    throw new ExportError(`--stream is ${stream}, expected a stream of this plant: ${ids.join(", ")}.`);
  const target = resolve(out);
  const store = sqliteReader(join(data, "record.db"));
  try {
    const stretch = { streams: stream === undefined ? ids : [stream], from, to };
    const written = await writeChecked(target, exportLines(store, what, format, stretch));
    if (json) console.log(JSON.stringify({ file: target, ...written }));
    else console.log(`${target}: ${written.lines} lines, ${written.bytes} bytes, SHA-256 ${written.sha256}`);
  } finally {
    store.close();
  }
}

function timeOption(text: string): number {
  const time = timeOf(/^\d+$/.test(text) ? Number(text) : text);
  if (typeof time === "number") return time;
  throw new InvalidArgumentError(time);
}
