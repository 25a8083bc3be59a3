import type Database from "better-sqlite3";
import type { AxisSpec, ProcessState, RecordedEvent } from "../../../core/messages/index.ts";
import { dataGap, frozen, noGap, type RecordedStretch, unusable, usable } from "../../../core/rehearsal/index.ts";
import type { RecordedSpectrum } from "../store.ts";
import { spectrumValues } from "./spectrum-bytes.ts";

type ReadingRow = [
  time: number,
  received: number,
  t2: number | null,
  q: number | null,
  nearest: number | null,
  reason: string | null,
  gapFrom: number | null,
  history: number,
  numbers: Buffer,
  model: number | null,
];
type ModelOf = (k: number | null) => { id: string; properties: string[] } | undefined;

/** The columns of a stretch, for a rehearsal. */
export function stretchQuery(db: Database.Database, modelOf: ModelOf) {
  const count = db
    .prepare<[number, number, number], number>(
      "SELECT count(*) FROM reading WHERE stream = ? AND time >= ? AND time < ? AND late = 0",
    )
    .pluck();
  const readings = db
    .prepare<[number, number, number], ReadingRow>(
      `SELECT time, received, t2, q, nearest, unusable_reason, gap_from, history, properties, model FROM reading
       WHERE stream = ? AND time >= ? AND time < ? AND late = 0 ORDER BY time, sequence`,
    )
    .raw();
  // The state that held when the stretch began, and those that came in it.
  const states = db
    .prepare<{ stream: string; from: number; to: number }, string>(
      `SELECT json FROM event WHERE kind = 'process state' AND stream = @stream AND at < @to
       AND at >= coalesce((SELECT max(at) FROM event WHERE kind = 'process state' AND stream = @stream AND at <= @from), 0) ORDER BY at, cursor`,
    )
    .pluck();

  return (key: number, stream: string, from: number, to: number): RecordedStretch => {
    const n = count.get(key, from, to) ?? 0;
    const columns = emptyColumns(n);
    const properties = new Map<string, Float64Array>();
    const models: string[] = [];
    let known: { k: number | null; names: Float64Array[] } | undefined;
    const columnsOf = (k: number | null): Float64Array[] => {
      const model = modelOf(k);
      if (model && !models.includes(model.id)) models.push(model.id);
      return (model?.properties ?? []).map((name) => {
        const column = properties.get(name) ?? new Float64Array(n).fill(Number.NaN);
        properties.set(name, column);
        return column;
      });
    };
    let i = 0;
    for (const row of readings.iterate(key, from, to)) {
      if (i === n) break; // one that came between the two queries
      const model = row[9];
      if (known?.k !== model) known = { k: model, names: columnsOf(model) };
      fill(columns, i, row);
      const numbers = row[8];
      known!.names.forEach((column, j) => {
        column[i] = numbers.readDoubleLE(16 * j);
      });
      i++;
    }
    const processStates = states
      .all({ stream, from, to })
      .map((json) => (JSON.parse(json) as RecordedEvent).process)
      .filter((state): state is ProcessState => state !== undefined);
    return { stream, ...columns, properties, models, processStates };
  };
}

function emptyColumns(n: number) {
  const numbers = () => new Float64Array(n);
  const flags = () => new Uint8Array(n);
  return {
    ...{ time: numbers(), received: numbers(), t2: numbers(), q: numbers(), nearest: numbers() },
    ...{ usability: flags(), gap: flags(), history: flags() },
  };
}

function fill(columns: ReturnType<typeof emptyColumns>, i: number, row: ReadingRow): void {
  const [time, received, t2, q, nearest, reason, gapFrom, history] = row;
  columns.time[i] = time;
  columns.received[i] = received;
  columns.t2[i] = t2 ?? Number.NaN;
  columns.q[i] = q ?? Number.NaN;
  columns.nearest[i] = nearest ?? Number.NaN;
  columns.usability[i] = reason === "frozen" ? frozen : t2 === null ? unusable : usable;
  columns.gap[i] = gapFrom === null ? noGap : dataGap;
  columns.history[i] = history;
}

type SpectrumRow = [time: number, data: Buffer | null, width: number | null, axis: string | null];

/** The spectra of the same readings, one by one: a hundred thousand of them do not fit in memory. */
export function spectraQuery(db: Database.Database) {
  const rows = db
    .prepare<[number, number, number], SpectrumRow>(
      `SELECT reading.time, spectrum.data, spectrum.width, axis.json FROM reading
       LEFT JOIN spectrum ON spectrum.number = reading.number LEFT JOIN axis ON axis.k = spectrum.axis
       WHERE reading.stream = ? AND reading.time >= ? AND reading.time < ? AND reading.late = 0 ORDER BY reading.time, reading.sequence`,
    )
    .raw();
  const axes = new Map<string, AxisSpec>();
  const axisOf = (json: string): AxisSpec => {
    const axis = axes.get(json) ?? (JSON.parse(json) as AxisSpec);
    axes.set(json, axis);
    return axis;
  };
  return function* (key: number, from: number, to: number): Generator<RecordedSpectrum> {
    for (const [time, data, width, json] of rows.iterate(key, from, to)) {
      const values = data && width !== null ? spectrumValues(data, width) : null;
      yield { time, values, ...(json === null ? {} : { axis: axisOf(json) }) };
    }
  };
}
