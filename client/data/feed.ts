import type {
  Batch,
  EngineHealth,
  FromServer,
  Judged,
  OpenAlarm,
  RecordedEvent,
  Snapshot,
  StreamNow,
} from "../../core/messages/index.ts";
import { Link } from "./link.ts";

/** What arrives for the trend of one stream: new readings, or word that some were missed and the stretch has to be read again. */
export type ReadingsListener = (readings: readonly Judged[], missed: boolean) => void;

/** Events that are kept for the screens that list them; older ones are asked for over HTTP. */
const keptEvents = 200;

/**
 * All that comes in live: the newest state of every stream, the open alarms, the engine's health, the link's state, and the server's clock.
 * It draws nothing; elements listen through a controller (data/listening.ts).
 */
export class Feed {
  linkUp = false;
  /** false until the first snapshot: then there is nothing to show, but nothing is lost either */
  everUp = false;
  /** when the link was last heard, on the server's clock */
  heardAt: number | null = null;
  engine: EngineHealth | undefined;
  /** server's clock minus this computer's, ms */
  clockOffsetMs = 0;
  /** what the server said when it refused the link */
  refused: string | undefined;
  events: RecordedEvent[] = [];
  #cursor: number | undefined;
  readonly #streams = new Map<string, StreamNow>();
  readonly #ids: readonly string[];
  readonly #link: Link;
  readonly #general = new Set<() => void>();
  readonly #byStream = new Map<string, Set<() => void>>();
  readonly #readings = new Map<string, Set<ReadingsListener>>();

  constructor(url: string, streams: readonly string[]) {
    this.#ids = streams;
    this.#link = new Link(url, {
      subscription: () => ({ type: "subscribe", streams: [...this.#ids], since: this.#cursor }),
      message: (message) => this.#take(message),
      up: (up) => this.#setUp(up),
    });
  }

  open(): void {
    this.#link.open();
  }

  close(): void {
    this.#link.close();
  }

  /** The server's clock, as well as it is known: every age on the screens is told by it. */
  now(): number {
    return Date.now() + this.clockOffsetMs;
  }

  of(stream: string): StreamNow | undefined {
    return this.#streams.get(stream);
  }

  alarms(): OpenAlarm[] {
    return [...this.#streams.values()].flatMap((stream) => stream.alarms);
  }

  /** Calls back when link, engine, alarms or the record of events change. */
  watch(changed: () => void): () => void {
    return listen(this.#general, changed);
  }

  watchStream(stream: string, changed: () => void): () => void {
    return listen(setOf(this.#byStream, stream), changed);
  }

  watchReadings(stream: string, came: ReadingsListener): () => void {
    return listen(setOf(this.#readings, stream), came);
  }

  #take(message: FromServer): void {
    if (message.type === "refused") {
      this.refused = message.says;
      this.#tell(this.#general);
      return;
    }
    this.clockOffsetMs = message.serverTime - Date.now();
    this.heardAt = message.serverTime;
    if (message.type === "snapshot") this.#takeSnapshot(message);
    if (message.type === "batch") this.#takeBatch(message);
    if (message.type === "beat") {
      this.engine = message.engine;
      this.#tell(this.#general);
    }
  }

  #takeSnapshot(snapshot: Snapshot): void {
    const again = this.everUp;
    this.everUp = true;
    this.refused = undefined;
    this.engine = snapshot.engine;
    this.#cursor = snapshot.cursor;
    this.#keep(snapshot.events);
    for (const now of snapshot.streams) {
      this.#streams.set(now.stream, now);
      this.#tellStream(now.stream);
      if (again) for (const came of setOf(this.#readings, now.stream)) came([], true);
    }
    this.#tell(this.#general);
  }

  #takeBatch(batch: Batch): void {
    this.#cursor = batch.cursor;
    this.#keep(batch.events);
    for (const now of batch.now) {
      this.#streams.set(now.stream, now);
      this.#tellStream(now.stream);
    }
    const readings = new Map<string, Judged[]>();
    for (const judged of batch.readings) {
      const held = readings.get(judged.stream);
      if (held) held.push(judged);
      else readings.set(judged.stream, [judged]);
    }
    const touched = batch.skipped > 0 ? new Set(batch.now.map((now) => now.stream)) : new Set<string>();
    for (const stream of new Set([...readings.keys(), ...touched])) {
      for (const came of setOf(this.#readings, stream)) came(readings.get(stream) ?? [], touched.has(stream));
    }
    this.#tell(this.#general);
  }

  #keep(events: readonly RecordedEvent[]): void {
    if (events.length === 0) return;
    this.events = [...this.events, ...events].slice(-keptEvents);
  }

  #setUp(up: boolean): void {
    if (this.linkUp === up) return;
    this.linkUp = up;
    this.#tell(this.#general);
    for (const stream of this.#ids) this.#tellStream(stream);
  }

  #tellStream(stream: string): void {
    this.#tell(setOf(this.#byStream, stream));
  }

  #tell(listeners: Set<() => void>): void {
    for (const changed of listeners) changed();
  }
}

function setOf<T>(map: Map<string, Set<T>>, key: string): Set<T> {
  let set = map.get(key);
  if (!set) {
    set = new Set();
    map.set(key, set);
  }
  return set;
}

function listen<T>(set: Set<T>, listener: T): () => void {
  set.add(listener);
  return () => set.delete(listener);
}
