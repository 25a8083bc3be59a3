export type CsvCell = string | number | null | undefined;

/** A table as CSV (RFC 4180): quoted where it must be, nothing for what is not there. */
export function csvOf(rows: readonly (readonly CsvCell[])[]): string {
  const cell = (value: CsvCell) => {
    const text = value === null || value === undefined ? "" : String(value);
    return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
  };
  return rows.map((row) => `${row.map(cell).join(",")}\r\n`).join("");
}
