import { once } from "node:events";
import { writeFile } from "node:fs/promises";
import type { Writable } from "node:stream";
import { Command } from "commander";
import { defaultSeed, makePlant, type Plant, type PlantStreamId, streamIds } from "../plant/index.ts";
import { historyItem, labHistoryItem } from "../publisher/index.ts";
import {
  type Grid,
  historyEvents,
  type PlantEvent,
  readingAt,
  resultsOf,
  type SimulatedReading,
  samplesReported,
  sequenceFrom,
  settleMs,
  timeOf,
  truthOf,
  usualSchedule,
} from "../scenario/index.ts";
import { moment, periodNumber, seedNumber, streamId } from "./options.ts";
import { SimulatorError, UsageError } from "./simulator-error.ts";

interface Options extends Grid {
  from: number;
  to: number;
  seed: number;
  streams?: PlantStreamId[];
  truth?: string;
}

export function historyCommand(): Command {
  return new Command("history")
    .description(
      "write the readings of a stretch of time to standard output, as a CBOR sequence (RFC 8742) of\n" +
        "{ stream, time (epoch ms), sequence, values (RFC 8746 typed array), context: { temperature } }, in order of time;\n" +
        "between them the results of the laboratory, when they were there: { stream, received, lab: { time, property, value … } }",
    )
    .requiredOption("--from <time>", "first moment, RFC 3339 or epoch ms", moment)
    .requiredOption("--to <time>", "end (not in it)", moment)
    .requiredOption("--period-ms <number>", "time between two readings of a stream", periodNumber)
    .option("--seed <number>", "another plant, another number", seedNumber, defaultSeed)
    .option("--streams <id...>", `only these: ${streamIds.join(", ")}`, streamId)
    .option("--truth <file>", "write what truly happened in the stretch, as JSON")
    .action(async (options: Options) => {
      if (options.to <= options.from)
        throw new UsageError("--to is not after --from. Give an end that comes after the start.");
      const streams = options.streams ?? [...streamIds];
      const events = historyEvents(options.seed, options.from, options.to);
      if (options.truth !== undefined) await writeTruth(options.truth, events, streams, options);
      await writeAll(historyItems(makePlant(options.seed), events, streams, options), process.stdout);
    });
}

async function writeTruth(
  file: string,
  events: readonly PlantEvent[],
  streams: readonly PlantStreamId[],
  options: Options,
): Promise<void> {
  try {
    await writeFile(file, `${JSON.stringify(truthOf(events, streams, options), null, 2)}\n`);
  } catch (cause) {
    throw new SimulatorError(`--truth ${file} can't be written: ${(cause as Error).message}. Name a file that can.`, {
      cause,
    });
  }
}

/** The readings of a stretch, all streams together in order of time. */
export function* historyReadings(
  plant: Plant,
  events: readonly PlantEvent[],
  streams: readonly PlantStreamId[],
  { from, to, periodMs }: { from: number; to: number } & Grid,
): Generator<SimulatedReading> {
  const grid = { periodMs };
  const lines = streams.map((stream) => ({
    stream,
    sequence: sequenceFrom(grid, stream, from),
    events: events.filter((event) => event.stream === stream),
  }));
  for (;;) {
    const line = lines.reduce((a, b) =>
      timeOf(grid, b.stream, b.sequence) < timeOf(grid, a.stream, a.sequence) ? b : a,
    );
    const time = timeOf(grid, line.stream, line.sequence);
    if (time >= to) return;
    const near = line.events.filter((event) => event.start <= time && time <= event.end + settleMs(event) + periodMs);
    const reading = readingAt(plant, near, line.stream, line.sequence, grid);
    line.sequence++;
    if (reading) yield reading;
  }
}

/** The readings of a stretch with the laboratory's results between them, each as an item of the sequence. */
function* historyItems(
  plant: Plant,
  events: readonly PlantEvent[],
  streams: readonly PlantStreamId[],
  stretch: { from: number; to: number } & Grid,
): Generator<Buffer> {
  const samples = streams
    .flatMap((stream) => samplesReported(usualSchedule, plant.seed, stream, stretch.from, stretch.to))
    .filter(({ drawn }) => drawn >= stretch.from)
    .sort((a, b) => a.reported - b.reported);
  for (const reading of historyReadings(plant, events, streams, stretch)) {
    while (samples.length > 0 && samples[0].reported <= reading.time) {
      const sample = samples.shift()!;
      for (const result of resultsOf(plant, events, sample)) yield labHistoryItem(sample, result);
    }
    yield historyItem(reading);
  }
}

/** Written in pieces of this size: large enough that the pipe is not the work, small enough that the reader starts at once. */
const pieceBytes = 256 * 1024;

async function writeAll(items: Iterable<Buffer>, out: Writable): Promise<void> {
  let piece: Buffer[] = [];
  let bytes = 0;
  const flush = async () => {
    const whole = Buffer.concat(piece);
    piece = [];
    bytes = 0;
    if (!out.write(whole)) await once(out, "drain");
  };
  for (const item of items) {
    piece.push(item);
    bytes += item.length;
    if (bytes >= pieceBytes) await flush();
  }
  await flush();
}
