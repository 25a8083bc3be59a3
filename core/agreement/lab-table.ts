import { splitLine, TableError } from "../spectrum/index.ts";

/** A row of a laboratory's table as it stands there; `row` counts as a text editor does. */
export type TableRow = { row: number } & ({ fields: Record<string, string | number> } | { refused: string });
export type LabTable = { kind: "rows"; rows: TableRow[] } | { kind: "unreadable"; says: string };

const required = ["time", "property", "value", "unit"];
const optional = ["method", "sample", "by"];
/** A laboratory's results of years; a table of more is another one. */
const mostRows = 20_000;

/**
 * Reads a table of laboratory results (CSV): comma-separated, a header row with `time`, `property`, `value`, `unit` and, where wanted, `method`,
 * `sample`, `by`, in any order. Wrong columns make the whole unreadable, a wrong cell its row; nothing is guessed or skipped.
 */
export function parseLabTable(text: string): LabTable {
  const lines = text.replace(/^\uFEFF/, "").split(/\r?\n/);
  while (lines.at(-1)?.trim() === "") lines.pop();
  const columns = split(lines[0] ?? "", 1);
  if (typeof columns === "string") return { kind: "unreadable", says: columns };
  const wrong = wrongHeader(
    columns.map((name) => name.trim()),
    lines[0] ?? "",
  );
  if (wrong !== undefined) return { kind: "unreadable", says: wrong };
  if (lines.length === 1) return { kind: "unreadable", says: "the table has a header and no rows." };
  if (lines.length > mostRows) {
    return {
      kind: "unreadable",
      says: `${lines.length - 1} rows, at most ${mostRows} are taken at a time. Cut the table.`,
    };
  }
  const names = columns.map((name) => name.trim());
  return { kind: "rows", rows: lines.slice(1).map((line, i) => rowOf(line, i + 2, names)) };
}

function wrongHeader(names: readonly string[], line: string): string | undefined {
  const expected = `expected time, property, value, unit and, where wanted, ${optional.join(", ")}, separated by commas`;
  const missing = required.filter((name) => !names.includes(name));
  const unknown = names.filter((name) => !required.includes(name) && !optional.includes(name));
  const twice = names.find((name, i) => names.indexOf(name) !== i);
  if (missing.length > 0) {
    const got = line.includes(";") ? "it is separated by semicolons" : `it has ${names.join(", ") || "no columns"}`;
    return `line 1: ${missing.join(", ")} missing (${got}), ${expected}.`;
  }
  if (unknown.length > 0) return `line 1: column "${unknown[0]}" is unknown, ${expected}.`;
  return twice === undefined ? undefined : `line 1: column "${twice}" stands there twice, ${expected}.`;
}

function rowOf(line: string, row: number, names: readonly string[]): TableRow {
  const cells = split(line, row);
  if (typeof cells === "string") return { row, refused: cells };
  if (cells.length !== names.length) {
    const got = line.trim() === "" ? "empty" : `${cells.length} fields`;
    return { row, refused: `${got}, expected ${names.length}, as the header has.` };
  }
  const fields = Object.fromEntries(names.map((name, i) => [name, cells[i].trim()]));
  const value = Number(fields["value"]);
  if (fields["value"] === "" || !Number.isFinite(value)) {
    return { row, refused: `value is "${fields["value"]}", expected a number such as 7.25.` };
  }
  if (fields["unit"] === "") return { row, refused: "unit is missing." };
  const time = /^\d+$/.test(fields["time"]) ? Number(fields["time"]) : fields["time"];
  return { row, fields: { ...fields, value, time } };
}

function split(line: string, row: number): string[] | string {
  try {
    return splitLine(line, row, "the table");
  } catch (error) {
    if (error instanceof TableError) return error.message;
    throw error;
  }
}
