import { type Plant, type PlantStreamId, streamIds } from "../plant/index.ts";
import {
  type Grid,
  kindOf,
  type PlantEvent,
  processStateAt,
  readingAt,
  resultsOf,
  type Scenario,
  samplesReported,
  scenarioEvents,
  sequenceFrom,
  timeOf,
} from "../scenario/index.ts";
import { type BrokerLink, brokerLink } from "./broker-link.ts";
import { lane } from "./lane.ts";
import { labPayload, readingPayload } from "./payload.ts";
import { processClock } from "./process-clock.ts";

export interface PublisherOptions extends Grid {
  broker: string;
  prefix: string;
  site: string;
  scenario: Scenario;
  plant: Plant;
  /** process time at which the run begins, epoch ms */
  start: number;
  /** process time by wall-clock time */
  speed: number;
  /** most publishes that wait for the broker's acknowledgement at a time */
  inFlight: number;
  /** told of what goes on, one line each */
  say: (line: string) => void;
}

export interface Publisher {
  /** readings that the broker has acknowledged */
  readonly acknowledged: number;
  /** stops reading, waits a little for acknowledgements, closes the link */
  stop(): Promise<void>;
}

/** After a broken link the analyzers' own memory fills the gap this far back (wall-clock time); older readings are lost, and said to be. */
const rememberedMs = 15 * 60_000;
const stopGraceMs = 2000;

/** Runs the plant against a broker until it is stopped. */
export function startPublisher(options: PublisherOptions): Publisher {
  const { plant, scenario, start, say, prefix, site } = options;
  const link = brokerLink(options.broker, `millrace-simulator-${process.pid}-${Date.now().toString(36)}`, say);
  const clock = processClock(Date.now, options);
  const sending = lane(options.inFlight, (error) => {
    if (!stopping.signal.aborted) say(`a publish failed: ${error.message}`);
  });
  const stopping = new AbortController();
  const next = new Map(streamIds.map((stream) => [stream, sequenceFrom(options, stream, start)]));
  const topic = (stream: PlantStreamId, last: string) => `${prefix}/${site}/${stream}/${last}`;
  const tellStates = stateTeller(link, topic);
  const tellEvents = eventTeller(say);
  const tellResults = resultTeller(link, topic, options);
  let acknowledged = 0;

  async function run(): Promise<void> {
    while (!stopping.signal.aborted) {
      const { stream, sequence, time } = soonest(next, options);
      await pause(clock.untilMs(time), stopping.signal);
      if (stopping.signal.aborted) return;
      const events = scenarioEvents(scenario, start, time - options.periodMs, time);
      tellEvents(events, time);
      for (const change of tellStates(events, time)) await sending.start(change);
      for (const result of tellResults(stream, time)) await sending.start(result);
      const memoryMs = rememberedMs * Math.max(1, options.speed);
      if (clock.now() - time > memoryMs) {
        const from = sequenceFrom(options, stream, clock.now() - memoryMs);
        say(`${stream}: ${from - sequence} readings from ${iso(time)} on are lost: they could not be sent in time`);
        next.set(stream, from);
        continue;
      }
      next.set(stream, sequence + 1);
      const reading = readingAt(plant, events, stream, sequence, options);
      if (!reading) continue;
      await sending.start(async () => {
        await link.publish(topic(stream, "reading"), readingPayload(reading));
        acknowledged++;
      });
    }
  }
  const running = run();

  return {
    get acknowledged() {
      return acknowledged;
    },
    async stop() {
      stopping.abort();
      await Promise.race([sending.empty(), pause(stopGraceMs)]);
      await link.close();
      // With the link closed every waiting publish has failed, so a reading that waited for room goes on and sees the end.
      await Promise.race([running, pause(stopGraceMs)]);
    },
  };
}

function soonest(next: ReadonlyMap<PlantStreamId, number>, grid: Grid) {
  const waiting = [...next].map(([stream, sequence]) => ({ stream, sequence, time: timeOf(grid, stream, sequence) }));
  return waiting.reduce((a, b) => (b.time < a.time ? b : a));
}

/** Publishes a line's process state, retained, at the start and whenever it changes. */
function stateTeller(link: BrokerLink, topic: (stream: PlantStreamId, last: string) => string) {
  const told = new Map<PlantStreamId, string>();
  return (events: readonly PlantEvent[], time: number): (() => Promise<void>)[] =>
    streamIds.flatMap((stream) => {
      const state = processStateAt(events, stream, time);
      const words = JSON.stringify(state);
      if (told.get(stream) === words) return [];
      told.set(stream, words);
      const payload = JSON.stringify({ time: iso(time), ...state });
      return [() => link.publish(topic(stream, "state"), payload, { retain: true })];
    });
}

/** Publishes the laboratory's results of a line when they are there: of samples that were drawn since the run began. */
function resultTeller(
  link: BrokerLink,
  topic: (stream: PlantStreamId, last: string) => string,
  { plant, scenario, start }: PublisherOptions,
) {
  const toldUpTo = new Map<PlantStreamId, number>();
  const { laboratory } = scenario;
  return (stream: PlantStreamId, time: number): (() => Promise<void>)[] => {
    if (!laboratory) return [];
    const schedule = { everyMs: laboratory.everyMinutes * 60_000, turnaroundMs: laboratory.turnaroundMinutes * 60_000 };
    const samples = samplesReported(schedule, plant.seed, stream, toldUpTo.get(stream) ?? start, time);
    toldUpTo.set(stream, time);
    return samples
      .filter(({ drawn }) => drawn >= start)
      .flatMap((sample) => resultsOf(plant, scenarioEvents(scenario, start, sample.drawn, sample.drawn), sample))
      .map((result) => () => link.publish(topic(stream, "lab"), labPayload(result)));
  };
}

/** Says once when each event begins and when it ends. */
function eventTeller(say: (line: string) => void) {
  const open = new Map<string, PlantEvent>();
  const ended = new Set<string>();
  return (events: readonly PlantEvent[], time: number): void => {
    for (const event of events) {
      const id = `${event.stream} ${event.kind} ${event.start}`;
      if (event.start > time || open.has(id) || ended.has(id)) continue;
      open.set(id, event);
      say(`${iso(time)} ${event.stream} ${event.kind} begins: ${kindOf[event.kind].says}`);
    }
    for (const [id, event] of open) {
      if (time < event.end) continue;
      open.delete(id);
      ended.add(id);
      if (event.kind !== "bubble") say(`${iso(time)} ${event.stream} ${event.kind} ends`);
    }
    // What has left sight for good need not be remembered: a run may last for months.
    for (const id of ended)
      if (!events.some((event) => `${event.stream} ${event.kind} ${event.start}` === id)) ended.delete(id);
  };
}

function iso(time: number): string {
  return new Date(time).toISOString();
}

function pause(ms: number, signal?: AbortSignal): Promise<void> {
  if (ms <= 0 || signal?.aborted) return Promise.resolve();
  return new Promise((resolve) => {
    const done = () => {
      clearTimeout(timer);
      signal?.removeEventListener("abort", done);
      resolve();
    };
    // A timer holds at most 2³¹ ms; a longer wait is taken up again by the loop.
    const timer = setTimeout(done, Math.min(ms, 2 ** 30));
    signal?.addEventListener("abort", done, { once: true });
  });
}
