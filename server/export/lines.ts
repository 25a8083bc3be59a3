import { type AxisSpec, type Excursion, type RecordedEvent, resultOf } from "../../core/messages/index.ts";
import type { Model } from "../../core/model/index.ts";
import { axisFromSpec, sameAxis } from "../../core/spectrum/index.ts";
import type { StoredReading, StoreReader } from "../store/store.ts";
import { type Cell, csvLine } from "./csv-line.ts";
import { ExportError } from "./export-error.ts";

/** What may be taken out of the record. */
export const exportKinds = ["results", "spectra", "events", "excursions"] as const;
export type ExportKind = (typeof exportKinds)[number];
export type ExportFormat = "csv" | "ndjson";

/** `from` ≤ time < `to`, epoch ms */
export interface Stretch {
  streams: readonly string[];
  from: number;
  to: number;
}

/** Readings taken into memory at a time. */
const portion = 500;

/** The record of a stretch as lines of text, stream by stream in order of time. @throws ExportError where a table cannot hold it */
export function* exportLines(
  store: StoreReader,
  kind: ExportKind,
  format: ExportFormat,
  stretch: Stretch,
): Generator<string> {
  switch (kind) {
    case "results":
      yield* format === "csv" ? resultTable(store, stretch) : jsonLines(readings(store, stretch), resultRecord);
      return;
    case "spectra":
      yield* format === "csv" ? spectrumTable(store, stretch) : jsonLines(spectra(store, stretch), spectrumRecord);
      return;
    case "events":
      yield* format === "csv" ? eventTable(events(store, stretch)) : jsonLines(events(store, stretch), timed);
      return;
    case "excursions":
      yield* format === "csv"
        ? excursionTable(excursions(store, stretch))
        : jsonLines(excursions(store, stretch), same);
      return;
    default:
      kind satisfies never;
  }
}

function* readings(store: StoreReader, { streams, from, to }: Stretch): Generator<StoredReading> {
  for (const stream of streams) {
    let after = { time: from, sequence: -1 };
    for (;;) {
      const page = store.readingsAfter(stream, after, to, portion);
      yield* page;
      if (page.length < portion) break;
      after = page[page.length - 1].judged;
    }
  }
}

function* spectra(store: StoreReader, stretch: Stretch): Generator<StoredReading & { values: Float64Array }> {
  for (const reading of readings(store, stretch)) {
    if (reading.values) yield { ...reading, values: reading.values };
  }
}

function* events(store: StoreReader, { streams, from, to }: Stretch): Generator<RecordedEvent> {
  for (const event of store.everyEvent(from, to)) {
    if (event.stream === null || streams.includes(event.stream)) yield event;
  }
}

function* excursions(store: StoreReader, { streams, from, to }: Stretch): Generator<Excursion> {
  for (const stream of streams) {
    yield* store.excursions({ stream, from, to, limit: Number.MAX_SAFE_INTEGER }).reverse();
  }
}

function* jsonLines<T>(things: Iterable<T>, record: (thing: T) => object): Generator<string> {
  for (const thing of things) yield `${JSON.stringify(record(thing))}\n`;
}

const resultRecord = ({ judged, receivedAt, late, history }: StoredReading) => ({
  stream: judged.stream,
  ...resultOf(judged),
  received: new Date(receivedAt).toISOString(),
  late,
  history,
});
/** As readings come in, so that a `load` takes it again. */
const spectrumRecord = ({ judged, values, axis }: StoredReading & { values: Float64Array }) => ({
  stream: judged.stream,
  time: new Date(judged.time).toISOString(),
  sequence: judged.sequence,
  values: Array.from(values),
  axis,
});
const timed = ({ at, ...event }: RecordedEvent) => ({ time: new Date(at).toISOString(), ...event });
const same = (excursion: Excursion) => excursion;

function* resultTable(store: StoreReader, stretch: Stretch): Generator<string> {
  const names = propertiesOf(store, stretch.streams);
  yield csvLine([
    ...["stream", "time", "sequence", "verdict"],
    ...names.flatMap((name) => [name, `${name} uncertainty`]),
    ...["t2", "q", "leverage", "nearest", "t2 ratio", "q ratio", "nearest ratio"],
    ...["unusable", "model", "limit set", "received", "late", "history"],
  ]);
  for (const { judged, receivedAt, late, history } of readings(store, stretch)) {
    const { stream, time, sequence, verdict, properties, t2, q, leverage, nearest, ratios } = judged;
    yield csvLine([
      ...[stream, new Date(time).toISOString(), sequence, verdict.join(" ")],
      ...names.flatMap((name) => [properties[name]?.value, properties[name]?.uncertainty]),
      ...[t2, q, leverage, nearest, ratios.t2, ratios.q, ratios.nearest],
      ...[judged.unusable, judged.model, judged.limitSet, new Date(receivedAt).toISOString(), late, history],
    ]);
  }
}

/** Of every model that was in charge of one of the streams, in the order in which they came. */
function propertiesOf(store: StoreReader, streams: readonly string[]): string[] {
  return [...new Set(streams.flatMap((stream) => store.propertiesRecorded(stream)))];
}

/** A column a channel, headed by its place on the axis: a table has one axis. @throws ExportError when the stretch has several */
function* spectrumTable(store: StoreReader, stretch: Stretch): Generator<string> {
  const [stream, ...others] = stretch.streams;
  if (others.length > 0) {
    throw new ExportError(
      `spectra as a table are of one stream, got ${stretch.streams.length}. Name it with --stream.`,
    );
  }
  let axis: ReturnType<typeof axisFromSpec> | undefined;
  for (const { judged, values, axis: spec } of spectra(store, stretch)) {
    const at = `${stream}, ${new Date(judged.time).toISOString()}`;
    const own = axisFromSpec(spec ?? axisOfModel(store, judged.model) ?? noAxis(at));
    if (!axis) yield csvLine(["time", "sequence", ...own.points]);
    axis ??= own;
    if (!sameAxis(axis, own) || values.length !== axis.points.length) {
      throw new ExportError(
        `${at}: the axis is not that of the first spectrum, and a table has one. Take a shorter stretch, or --format ndjson.`,
      );
    }
    yield csvLine([new Date(judged.time).toISOString(), judged.sequence, ...values]);
  }
}

/** A spectrum without an axis of its own lies on that of the model that scored it. */
function axisOfModel(store: StoreReader, id: string | null): AxisSpec | undefined {
  const text = id === null ? undefined : store.modelText(id);
  return text === undefined ? undefined : (JSON.parse(text) as Pick<Model, "axis">).axis;
}

function noAxis(at: string): never {
  throw new ExportError(`${at}: the spectrum came without an axis and no model scored it. Take --format ndjson.`);
}

function* eventTable(list: Iterable<RecordedEvent>): Generator<string> {
  yield csvLine(["cursor", "time", "stream", "kind", "by", "says", "alarm", "history"]);
  for (const { cursor, at, stream, kind, by, says, alarm, setAside, key, history } of list) {
    const cells: Cell[] = [cursor, new Date(at).toISOString(), stream, kind, by, says];
    yield csvLine([...cells, alarm?.key ?? setAside?.key ?? key, history ?? false]);
  }
}

function* excursionTable(list: Iterable<Excursion>): Generator<string> {
  yield csvLine(["stream", "kind", "start", "end", "ended", "label", "labelled by"]);
  for (const { stream, kind, start, end, ended, label } of list) {
    const closed = end == null ? null : new Date(end).toISOString();
    yield csvLine([stream, kind, new Date(start).toISOString(), closed, ended, label?.is, label?.by]);
  }
}
