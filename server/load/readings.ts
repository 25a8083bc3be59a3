import { DecoderStream } from "cbor-x";
import { MillraceError } from "../../core/errors.ts";
import type { Reading } from "../../core/messages/index.ts";
import { readingOf } from "../engine/decode.ts";

/** One reading of recorded history; `stream` where the source says it. */
export interface HistoryItem {
  stream?: string;
  reading: Reading;
}

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

function itemOf(value: unknown, where: string): HistoryItem {
  const decoded = readingOf(value);
  if (decoded.kind === "refused") throw new LoadError(`${where}: ${decoded.says}.`);
  const stream = (value as { stream?: unknown }).stream;
  return { ...(typeof stream === "string" ? { stream } : {}), reading: decoded.reading };
}
