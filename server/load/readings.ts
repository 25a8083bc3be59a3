import { DecoderStream } from "cbor-x";
import { MillraceError } from "../../core/errors.ts";
import type { AxisSpec, Reading } from "../../core/messages/index.ts";
import { type Axis, parseHeader, parseRow, type TableHeader } from "../../core/spectrum/index.ts";
import { readingOf, timeOf } from "../engine/decode.ts";
import { labEntryOf } from "../engine/decode-lab.ts";
import type { HistoricLab } from "../engine/turn.ts";

/** One reading of recorded history, or one result of the laboratory; `stream` where the source says it. */
export type HistoryItem = { stream?: string } & ({ reading: Reading } | { result: HistoricLab });

export class LoadError extends MillraceError {
  readonly code = "load";
}

/** Readings from lines of JSON (NDJSON). @throws LoadError naming the line; what came before it has been handed over. */
export async function* readingsOfLines(lines: AsyncIterable<string>): AsyncGenerator<HistoryItem> {
  let number = 0;
  for await (const line of lines) {
    number++;
    if (line.trim() === "") continue;
    let value: unknown;
    try {
      value = JSON.parse(line);
    } catch (cause) {
      throw new LoadError(`line ${number} is no JSON (${(cause as Error).message}), expected one reading a line.`, {
        cause,
      });
    }
    yield itemOf(value, `line ${number}`);
  }
}

/**
 * Readings from a table (CSV): a `time` column, an optional `sequence` (else the line counts), then channels headed by numbers; any other column
 * goes along as context. @throws TableError or LoadError naming the line
 */
export async function* readingsOfTable(lines: AsyncIterable<string>, unit: Axis["unit"]): AsyncGenerator<HistoryItem> {
  let number = 0;
  let header: TableHeader | undefined;
  let axis: AxisSpec | undefined;
  for await (const line of lines) {
    number++;
    if (!header) {
      header = parseHeader(line.replace(/^\uFEFF/, ""), "the table", unit);
      axis = specOf(header.axis);
      if (!header.columns.includes("time")) {
        throw new LoadError(
          "line 1: the header has no column time, expected one with RFC 3339 times or epoch milliseconds.",
        );
      }
      continue;
    }
    const row = parseRow(line, number, header);
    const { sequence = number, ...others } = row.references;
    const time = /^\d+$/.test(row.time!) ? Number(row.time) : row.time;
    const known = Object.entries(others).filter(([, value]) => Number.isFinite(value));
    const context = known.length > 0 ? { context: Object.fromEntries(known) } : {};
    yield itemOf({ time, sequence, values: row.values, axis, ...context }, `line ${number}`);
  }
}

/** In the short form where the points are even: it goes with every reading. */
function specOf({ unit, points }: Axis): AxisSpec {
  const step = points[1] - points[0];
  const even = points.every((point, j) => Math.abs(point - (points[0] + j * step)) <= 1e-9 * Math.abs(point));
  return even ? { unit, start: points[0], step, count: points.length } : { unit, points: Array.from(points) };
}

/** Readings from a CBOR sequence (RFC 8742). @throws LoadError naming the item. */
export async function* readingsOfCborSequence(bytes: AsyncIterable<Uint8Array>): AsyncGenerator<HistoryItem> {
  const decoder = new DecoderStream({ useRecords: false, mapsAsObjects: true });
  let number = 0;
  let failure: Error | undefined;
  const feeding = (async () => {
    for await (const chunk of bytes) {
      if (!decoder.write(chunk)) await new Promise<void>((resolve) => decoder.once("drain", resolve));
    }
    decoder.end();
  })().catch((error: Error) => {
    failure = error;
    decoder.destroy(error);
  });
  try {
    for await (const value of decoder) yield itemOf(value, `item ${++number}`);
  } catch (cause) {
    if (cause instanceof LoadError) throw cause;
    const says = (failure ?? (cause as Error)).message;
    throw new LoadError(`after item ${number}: no CBOR (${says}), expected one reading an item.`, { cause });
  }
  await feeding;
}

/** `{ lab: { time, property, value, unit … }, received }` is a result of the laboratory and when it was there; anything else a reading. */
function itemOf(value: unknown, where: string): HistoryItem {
  const fields = (value ?? {}) as { stream?: unknown; lab?: unknown; received?: unknown };
  const stream = typeof fields.stream === "string" ? { stream: fields.stream } : {};
  if (fields.lab !== undefined) return { ...stream, result: resultOf(fields, where) };
  const decoded = readingOf(value);
  if (decoded.kind === "refused") throw new LoadError(`${where}: ${decoded.says}.`);
  return { ...stream, reading: decoded.reading };
}

function resultOf({ lab, received }: { lab?: unknown; received?: unknown }, where: string): HistoricLab {
  const decoded = labEntryOf(lab);
  if (decoded.kind === "refused") throw new LoadError(`${where}: lab.${decoded.says}.`);
  const receivedAt = timeOf((received ?? decoded.entry.time) as number | string);
  if (typeof receivedAt === "string") throw new LoadError(`${where}: received: ${receivedAt}.`);
  return { entry: decoded.entry, receivedAt };
}
