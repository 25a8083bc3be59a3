import type { Reading } from "../../core/messages/index.ts";
import type { LoadOutcome, Portion } from "../engine/engine.ts";
import type { EngineThread } from "../engine/engine-thread.ts";
import { type HistoryItem, LoadError } from "./readings.ts";

/** One portion is one message to the engine and at most one commit: large enough to be quick, small enough that live readings never wait long. */
const portion = 250;
/** The spacing of the history is taken from its first readings. */
const spacingFrom = 50;

interface OpenPart {
  waiting: Portion;
  open: boolean;
  done: number;
}

export interface HistorySource {
  items: AsyncIterable<HistoryItem>;
  /** for items that do not say theirs */
  stream?: string;
  /** expected number of readings of all streams together, for the share done */
  expected?: number;
  onProgress?: (done: number) => void;
}

/**
 * Brings recorded history to the engine portion by portion, each on record before the next is sent. Readings of a stream must be in order of
 * time. @throws LoadError; what was on record by then stays, and a second load finds it there.
 */
export async function loadHistory(engine: EngineThread, source: HistorySource): Promise<Map<string, LoadOutcome>> {
  const parts = new Map<string, OpenPart>();
  let done = 0;
  const outcomes = new Map<string, LoadOutcome>();
  try {
    for await (const { stream = source.stream, ...item } of source.items) {
      if (stream === undefined) throw new LoadError("a reading names no stream; give one with --stream.");
      const part = parts.get(stream) ?? { waiting: { readings: [], results: [] }, open: false, done: 0 };
      parts.set(stream, part);
      if ("result" in item) part.waiting.results.push(item.result);
      else part.waiting.readings.push(item.reading);
      if (part.waiting.readings.length >= portion) {
        done += part.waiting.readings.length;
        await send(engine, stream, part, shareOf(done, source.expected));
        source.onProgress?.(done);
      }
    }
    for (const [stream, part] of parts) {
      const { readings, results } = part.waiting;
      done += readings.length;
      if (readings.length + results.length > 0) await send(engine, stream, part, shareOf(done, source.expected));
      source.onProgress?.(done);
    }
  } finally {
    for (const [stream, part] of parts) if (part.open) outcomes.set(stream, await engine.closeLoad(stream));
  }
  return outcomes;
}

async function send(engine: EngineThread, stream: string, part: OpenPart, share: number): Promise<void> {
  if (!part.open) {
    await engine.openLoad(stream, spacingOf(part.waiting.readings));
    part.open = true;
  }
  await engine.load(stream, part.waiting, share);
  part.done += part.waiting.readings.length;
  part.waiting = { readings: [], results: [] };
}

function shareOf(done: number, expected: number | undefined): number {
  return expected ? Math.min(1, done / expected) : 0;
}

/** The median time between readings, ms. */
function spacingOf(readings: readonly Reading[]): number {
  const gaps = readings
    .slice(0, spacingFrom)
    .map((reading, i) => (i === 0 ? 0 : reading.time - readings[i - 1].time))
    .filter((gap) => gap > 0)
    .sort((a, b) => a - b);
  return gaps[Math.floor(gaps.length / 2)] ?? 1000;
}
