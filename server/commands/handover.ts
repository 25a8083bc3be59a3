import { join } from "node:path";
import { Command, InvalidArgumentError, Option } from "commander";
import { MillraceError } from "../../core/errors.ts";
import { readPlantConfig } from "../config/plant-config.ts";
import { ReadingExplainer } from "../gateway/reading-view.ts";
import { type RecordFormat, recordFile, recordFormats } from "../handover/record-file.ts";
import { ShiftBook } from "../handover/shift-book.ts";
import { sqliteReader } from "../store/sqlite/reader.ts";
import { writeWhole } from "./files.ts";

interface Options {
  config: string;
  shift: string | number;
  format: RecordFormat;
  out?: string;
}

class HandoverError extends MillraceError {
  readonly code = "handover";
}

/** `handover`: the record of a shift as a file. It reads the record beside a running service, or without one. */
export function handoverCommand(): Command {
  return new Command("handover")
    .description(
      "write the record of a shift as HTML (to print, A4 or Letter), CSV or JSON, also while the service runs",
    )
    .requiredOption("--config <file>", "the plant's configuration")
    .option("--shift <which>", "now, last (the one before), or a time in it: RFC 3339 with an offset", which, "last")
    .addOption(new Option("--format <format>", "of the output").choices(recordFormats).default("html"))
    .option("--out <file>", "where to (default: standard output)")
    .action(run);
}

async function run({ config: file, shift: asked, format, out }: Options): Promise<void> {
  const config = readPlantConfig(file);
  const store = sqliteReader(join(config.data, "record.db"));
  try {
    const book = new ShiftBook(config, store, new ReadingExplainer(store));
    const now = Date.now();
    const running = book.calendar.at(now);
    const shift =
      typeof asked === "number" ? book.calendar.at(asked) : asked === "now" ? running : book.calendar.before(running);
    if (shift.from > now) {
      throw new HandoverError(
        `--shift is a shift that begins at ${new Date(shift.from).toISOString()}, expected one that has begun. Name an earlier time.`,
      );
    }
    const text = recordFile(book.bound(shift, now), format);
    if (out === undefined) process.stdout.write(text);
    else await writeWhole(out, text);
  } finally {
    store.close();
  }
}

function which(text: string): string | number {
  if (text === "now" || text === "last") return text;
  const at = /\d{4}-\d\d-\d\d[T ]\d\d:\d\d.*(Z|[+-]\d\d:?\d\d)$/.test(text) ? Date.parse(text) : Number.NaN;
  if (!Number.isFinite(at)) {
    throw new InvalidArgumentError('expected now, last, or a time with its offset, such as "2026-12-01T08:00:00Z"');
  }
  return at;
}
