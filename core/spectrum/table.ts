import { MillraceError, type Mismatch, mismatchSentence } from "../errors.ts";
import { type Axis, AxisError, axisFromSpec } from "./axis.ts";

/** A table of spectra that cannot be read, naming file, line and column. */
export class TableError extends MillraceError {
  readonly code = "table";
  constructor(where: string, mismatch: Mismatch) {
    super(mismatchSentence(where, mismatch), { cause: mismatch.cause });
  }
}

/** What the header row says: which columns are what. */
export interface TableHeader {
  file: string;
  columns: string[];
  axis: Axis;
  /** index of the column of each channel, in the order of the axis */
  channels: number[];
  /** columns that are neither a channel nor sample, time or group: reference values */
  properties: string[];
}

export interface TableRow {
  line: number;
  /** the sample's name; its number among the rows where there is no such column */
  sample: string;
  time?: string;
  group?: string;
  /** reference values by property; NaN where the cell is empty */
  references: Record<string, number>;
  values: Float64Array;
}

export interface Table {
  header: TableHeader;
  rows: TableRow[];
}

const reserved = ["sample", "time", "group"];

/**
 * Reads a table of spectra, as calibration and scoring take it: comma-separated; a header row; optional columns `sample`, `time`, `group`; columns
 * of reference values; then channels, whose names are numbers (the axis, ascending or descending). Quotes as in RFC 4180, but a field ends
 * on its line.
 *
 * @throws TableError naming file, line and column: nothing is guessed, skipped or filled in
 */
export function parseTable(text: string, file: string, unit: Axis["unit"]): Table {
  const lines = text.replace(/^\uFEFF/, "").split(/\r?\n/);
  if (lines.at(-1) === "") lines.pop();
  const header = parseHeader(lines[0] ?? "", file, unit);
  const rows = lines.slice(1).map((line, i) => parseRow(line, i + 2, header));
  const seen = new Map<string, number>();
  for (const { sample, line } of rows) {
    const earlier = seen.get(sample);
    if (earlier !== undefined) {
      throw new TableError(`${file}, line ${line}: the sample`, {
        got: `"${sample}", as in line ${earlier}`,
        expected: "a name of its own",
        todo: "Give replicates names of their own, and the same group.",
      });
    }
    seen.set(sample, line);
  }
  return { header, rows };
}

/** @throws TableError */
export function parseHeader(line: string, file: string, unit: Axis["unit"]): TableHeader {
  const columns = splitLine(line, 1, file).map((name) => name.trim());
  const twice = columns.findIndex((name, i) => columns.indexOf(name) !== i);
  if (twice >= 0) {
    throw new TableError(`${file}, line 1: column ${twice + 1}`, {
      got: `"${columns[twice]}", as column ${columns.indexOf(columns[twice]) + 1}`,
      expected: "a name of its own",
      todo: "Rename or remove one of the two.",
    });
  }
  const channels = columns.flatMap((name, i) => (numberOf(name) === undefined ? [] : [i]));
  if (channels.length < 2) {
    const separator = line.includes(";") ? "semicolons" : line.includes("\t") ? "tabs" : undefined;
    throw new TableError(`${file}, line 1: the header`, {
      got: separator ? `separated by ${separator}` : `without channels (${columns.slice(0, 5).join(", ")} …)`,
      expected: "columns separated by commas, and at least two of them headed by a number, the place on the axis",
      todo: "Export the table again.",
    });
  }
  const points = channels.map((i) => numberOf(columns[i])!);
  const properties = columns.filter((name, i) => !reserved.includes(name) && !channels.includes(i));
  return { file, columns, channels, properties, axis: axisOf(points, unit, file) };
}

/** @param line 1 is the header; rows are counted from 2 */
export function parseRow(text: string, line: number, header: TableHeader): TableRow {
  const { file, columns, channels, properties } = header;
  const fields = splitLine(text, line, file);
  if (fields.length !== columns.length) {
    throw new TableError(`${file}, line ${line}`, {
      got: text.trim() === "" ? "empty" : `${fields.length} fields`,
      expected: `${columns.length}, as the header has`,
      todo: "Correct the line, or remove it.",
    });
  }
  const cell = (name: string): string | undefined => {
    const i = columns.indexOf(name);
    return i < 0 ? undefined : fields[i].trim();
  };
  const values = new Float64Array(channels.length);
  for (let j = 0; j < channels.length; j++) values[j] = numberIn(fields[channels[j]], columns[channels[j]], line, file);
  const references: Record<string, number> = {};
  for (const name of properties) {
    const found = cell(name)!;
    references[name] = found === "" ? Number.NaN : numberIn(found, name, line, file);
  }
  const sample = cell("sample");
  if (sample === "") {
    throw new TableError(`${file}, line ${line}: the sample`, {
      got: "empty",
      expected: "a name",
      todo: "Name the sample.",
    });
  }
  return { line, sample: sample ?? String(line - 1), time: cell("time"), group: cell("group"), references, values };
}

function axisOf(points: number[], unit: Axis["unit"], file: string): Axis {
  try {
    return axisFromSpec({ unit, points });
  } catch (cause) {
    if (!(cause instanceof AxisError)) throw cause;
    throw new TableError(`${file}, line 1: the axis`, {
      got: `wrong: ${cause.message}`,
      expected: "channels in ascending or descending order",
      todo: "Sort the columns.",
      cause,
    });
  }
}

function numberIn(text: string, column: string, line: number, file: string): number {
  const value = numberOf(text.trim());
  if (value !== undefined) return value;
  throw new TableError(`${file}, line ${line}, column ${column}`, {
    got: text.trim() === "" ? "empty" : `"${text.trim().slice(0, 40)}"`,
    expected: "a number such as -0.0123 or 4.5e-3",
    todo: "Correct the cell.",
  });
}

const number = /^[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d+)?$/;

function numberOf(text: string): number | undefined {
  if (!number.test(text)) return undefined;
  const value = Number(text);
  return Number.isFinite(value) ? value : undefined;
}

/** The fields of one line, comma-separated, quotes as in RFC 4180. @throws TableError */
export function splitLine(text: string, line: number, file: string): string[] {
  if (!text.includes('"')) return text.split(",");
  const fields: string[] = [];
  const field = /(?:"((?:[^"]|"")*)"|([^",]*))(,|$)/y;
  for (let more = true; more; ) {
    const found = field.exec(text);
    if (!found) {
      throw new TableError(`${file}, line ${line}, field ${fields.length + 1}`, {
        got: "quoted in a way that cannot be read",
        expected: 'a field in quotes, quotes within it doubled ("")',
        todo: "Correct the quotes; a field may not run on to the next line.",
      });
    }
    fields.push(found[1] === undefined ? found[2] : found[1].replaceAll('""', '"'));
    more = found[3] === ",";
  }
  return fields;
}
