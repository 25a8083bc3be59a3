import { adopt, freshState } from "../../core/judging/index.ts";
import type { EngineHealth, Judged, Reading, RecordedEvent, StreamNow } from "../../core/messages/index.ts";
import type { Changes, StoreWriter } from "../store/store.ts";
import type { MessageBatch, Source } from "./source.ts";
import { type EngineStream, rulesForHistory } from "./streams.ts";
import type { Topics } from "./topics.ts";
import {
  type Command,
  type CommandOutcome,
  type HistoricLab,
  type Input,
  type Load,
  loadTopic,
  streamNow,
  type Turn,
  takeTurn,
} from "./turn.ts";

/** What a turn of the engine tells the outside, once it is on record. */
export interface Told {
  judged: Judged[];
  now: StreamNow[];
  events: RecordedEvent[];
  cursor: number;
}

/** A part of a load: readings in order of time, and results of the laboratory in the order in which they came in. */
export interface Portion {
  readings: Reading[];
  results: HistoricLab[];
}

export interface LoadOutcome {
  recorded: number;
  repeated: number;
  refused: number;
}

/** Most messages that one commit holds; a larger group saves little more and makes the first of them wait. */
const mostMessages = 200;
const tickEveryMs = 500;
/** A commit that failed (disk full, database locked) is tried again after this long; nothing is acknowledged meanwhile. */
const retryAfterMs = 1000;

/**
 * The single writer: takes what has come in, judges it, commits, and only then acknowledges and tells. Everything else in it is waiting.
 */
export class Engine {
  readonly #store: StoreWriter;
  readonly #topics: Topics;
  readonly #approval: boolean;
  readonly #checks: readonly string[];
  readonly #tell: (told: Told) => void;
  readonly #log: (says: string) => void;
  #source: Source | undefined;
  #streams: Map<string, EngineStream>;
  readonly #loads = new Map<string, Load & { share: number }>();
  readonly #refused = new Map<string, number>();
  #cursor: number;
  #inputs: Input[] = [];
  readonly #replies = new Map<number, (outcome: CommandOutcome) => void>();
  #nextCommand = 1;
  #scheduled = false;
  #retrying = false;
  #stopped = false;
  #trouble: string | undefined;
  /** was the broker reached at the last look? undefined: nobody has looked */
  #reached: boolean | undefined;
  #listeningSince = Date.now();
  readonly #ticking: NodeJS.Timeout;

  constructor(parts: {
    store: StoreWriter;
    topics: Topics;
    streams: Map<string, EngineStream>;
    /** does a change of limits need another person's approval? */
    approval: boolean;
    /** keys of the checks that every shift has to do */
    checks: readonly string[];
    tell: (told: Told) => void;
    log: (says: string) => void;
  }) {
    this.#store = parts.store;
    this.#topics = parts.topics;
    this.#approval = parts.approval;
    this.#checks = parts.checks;
    this.#streams = parts.streams;
    this.#tell = parts.tell;
    this.#log = parts.log;
    this.#cursor = parts.store.lastCursor();
    this.#ticking = setInterval(() => this.#tick(), tickEveryMs);
  }

  /** Puts the start on record and begins to take readings. */
  start(source: Source): void {
    this.#source = source;
    this.#listeningSince = Date.now();
    const events: RecordedEvent[] = [this.#event("service started", "The engine has started.")];
    const states = new Map<string, EngineStream["state"]>();
    for (const [id, { rules, state }] of this.#streams) {
      const [adopted, notes] = adopt(state, this.#listeningSince, rules);
      this.#streams.set(id, { rules, state: adopted });
      states.set(id, adopted);
      for (const note of notes) events.push({ cursor: ++this.#cursor, ...note });
      if (rules.modelTrouble) events.push({ ...this.#event("model file refused", rules.modelTrouble), stream: id });
    }
    this.#store.commit({ readings: [], refusals: [], events, excursions: [], states });
    this.#tell({ judged: [], now: this.picture(), events, cursor: this.#cursor });
    this.wake();
  }

  /** There may be something to do. */
  wake(): void {
    // What comes in meanwhile must not have a commit that failed tried again at once, and again.
    if (this.#scheduled || this.#retrying || this.#stopped) return;
    this.#scheduled = true;
    setImmediate(() => {
      this.#scheduled = false;
      this.#turn();
    });
  }

  command(command: Command): Promise<CommandOutcome> {
    const id = this.#nextCommand++;
    return new Promise((resolve) => {
      this.#replies.set(id, resolve);
      this.#inputs.push({ kind: "command", id, now: Date.now(), command });
      this.wake();
    });
  }

  /** Opens a load of recorded history; readings at or after the live record's first are left out. @throws when one is under way. */
  openLoad(stream: string, periodMs: number): void {
    const engineStream = this.#streams.get(stream);
    if (!engineStream)
      throw new Error(`${stream} is no stream of this plant; it has ${[...this.#streams.keys()].join(", ")}`);
    if (this.#loads.has(stream)) throw new Error(`a load of ${stream} is under way; wait for its end`);
    const rules = rulesForHistory(engineStream.rules, periodMs);
    const counts = { recorded: 0, repeated: 0, refused: 0 };
    const until = this.#store.firstLive(stream) ?? Date.now();
    this.#loads.set(stream, { stream, rules, state: freshState, until, counts, share: 0 });
  }

  /** One portion of a load, in order; resolves once it is on record, so that the sender cannot run ahead. */
  load(stream: string, portion: Portion, share: number): Promise<LoadOutcome> {
    return this.#loadInput(stream, (load) => {
      load.share = share;
      return { kind: "history", load, ...portion };
    });
  }

  async closeLoad(stream: string): Promise<LoadOutcome> {
    const counts = await this.#loadInput(stream, (load) => ({ kind: "history ends", load, now: Date.now() }));
    this.#loads.delete(stream);
    return counts;
  }

  #loadInput(stream: string, make: (load: Load & { share: number }) => Input): Promise<LoadOutcome> {
    return new Promise((resolve, reject) => {
      const load = this.#loads.get(stream);
      if (!load) {
        reject(new Error(`no load of ${stream} is open`));
        return;
      }
      this.#inputs.push(make(load));
      this.#loadWaiters.push({ stream, resolve });
      this.wake();
    });
  }
  #loadWaiters: { stream: string; resolve: (outcome: LoadOutcome) => void }[] = [];

  /** Every stream as it is now. */
  picture(ids: Iterable<string> = this.#streams.keys()): StreamNow[] {
    return [...ids].map((id) => streamNow(this.#streams.get(id)!, this.#refused.get(id) ?? 0));
  }

  health(): EngineHealth {
    const { count, oldest } = this.#source?.waiting() ?? { count: 0, oldest: undefined };
    const [load] = this.#loads.values();
    return {
      running: !this.#stopped,
      source: this.#source?.connected() ?? false,
      waiting: count,
      behindMs: oldest === undefined ? 0 : Math.max(0, Date.now() - oldest),
      ...(load ? { loading: { stream: load.stream, done: load.counts.recorded, share: load.share } } : {}),
      ...(this.#trouble === undefined ? {} : { trouble: this.#trouble }),
    };
  }

  /** Finishes the turn under way, puts the stop on record and closes the store. What waits is taken up at the next start. */
  async stop(): Promise<void> {
    this.#stopped = true;
    clearInterval(this.#ticking);
    await this.#source?.close();
    const events = [this.#event("service stopped", "The engine was stopped.")];
    try {
      this.#store.commit({ readings: [], refusals: [], events, excursions: [], states: new Map() });
    } catch (error) {
      this.#log(
        `The stop could not be put on record (${(error as Error).message}); all that was acknowledged is there.`,
      );
    }
    this.#store.close();
  }

  /** A broker of the site's own that is lost, or reached again: on record, since what happens meanwhile comes late. */
  #watchSource(): void {
    const reached = this.#source?.connected() ?? false;
    if (reached === this.#reached) return;
    const first = this.#reached === undefined;
    this.#reached = reached;
    if (first && reached) return;
    const [event, says] = reached
      ? ["broker reached", "The broker is reached again."]
      : ["broker lost", "The broker is not reached: no readings can arrive."];
    void this.command({ kind: "record", event, says });
  }

  #tick(): void {
    this.#watchSource();
    this.#inputs.push({ kind: "tick", now: Date.now(), listeningSince: this.#listeningSince });
    this.wake();
  }

  #turn(): void {
    if (this.#stopped) return;
    const batch = this.#source?.take(mostMessages);
    // Live readings first: a load of history must not hold them up.
    const messages = batch?.messages ?? [];
    const inputs: Input[] = [...messages.map((message): Input => ({ kind: "message", message })), ...this.#inputs];
    const waiters = this.#loadWaiters;
    this.#inputs = [];
    this.#loadWaiters = [];
    if (inputs.length === 0) return;
    const turn = takeTurn(
      inputs,
      { streams: this.#streams, cursor: this.#cursor },
      {
        topics: this.#topics,
        approval: this.#approval,
        isRecorded: (...identity) => this.#store.isRecorded(...identity),
        excursion: (id) => this.#store.excursion(id),
        handover: { book: this.#store.handover, checks: this.#checks },
        readingsBetween: (...query) => this.#store.readingsBetween(...query),
        labResult: (...identity) => this.#store.labResult(...identity),
      },
    );
    if (!this.#commit(turn.changes)) {
      // Nothing was taken over, so the same inputs go through again; ticks are made anew by the clock.
      this.#inputs = [...inputs.filter(({ kind }) => kind !== "message" && kind !== "tick"), ...this.#inputs];
      this.#loadWaiters = [...waiters, ...this.#loadWaiters];
      this.#retrying = true;
      setTimeout(() => {
        this.#retrying = false;
        this.wake();
      }, retryAfterMs);
      return;
    }
    this.#takeOver(turn, batch);
    for (const { stream, resolve } of waiters) resolve(this.#loads.get(stream)?.counts ?? noCounts);
    if (messages.length > 0 || this.#inputs.length > 0) this.wake();
  }

  #commit(changes: Changes): boolean {
    try {
      if (hasChanges(changes)) this.#store.commit(changes);
    } catch (error) {
      const says = `The record cannot be written (${(error as Error).message}). Nothing is lost: readings wait, unacknowledged. Check the disk of the data folder.`;
      if (this.#trouble === undefined) this.#log(says);
      this.#trouble = says;
      return false;
    }
    if (this.#trouble !== undefined) this.#log("The record is written again.");
    this.#trouble = undefined;
    return true;
  }

  #takeOver(turn: Turn, batch: MessageBatch | undefined): void {
    this.#streams = turn.streams;
    this.#cursor = turn.cursor;
    for (const [stream, load] of turn.loads) {
      const known = this.#loads.get(stream);
      if (known) this.#loads.set(stream, { ...load, share: known.share });
    }
    for (const { stream, topic } of turn.changes.refusals) {
      // What a load of history could not use is not the line's trouble of today.
      if (stream !== null && topic !== loadTopic) this.#refused.set(stream, (this.#refused.get(stream) ?? 0) + 1);
    }
    batch?.acknowledge();
    for (const { id, outcome } of turn.replies) {
      this.#replies.get(id)?.(outcome);
      this.#replies.delete(id);
    }
    const { judged, touched, cursor } = turn;
    const { events } = turn.changes;
    if (judged.length === 0 && touched.size === 0 && events.length === 0) return;
    this.#tell({ judged, now: this.picture(touched), events, cursor });
  }

  #event(kind: string, says: string): RecordedEvent {
    return { cursor: ++this.#cursor, at: Date.now(), stream: null, kind, says };
  }
}

const noCounts: LoadOutcome = { recorded: 0, repeated: 0, refused: 0 };

function hasChanges({ readings, refusals, events, excursions, states }: Changes): boolean {
  return readings.length + refusals.length + events.length + excursions.length + states.size > 0;
}
