export type Cell = string | number | boolean | null | undefined;

/** One line of a CSV table (RFC 4180, but with a plain line feed): quoted where it must be, nothing for what is not there. */
export function csvLine(cells: readonly Cell[]): string {
  return `${cells.map(cellText).join(",")}\n`;
}

function cellText(cell: Cell): string {
  const text = String(cell ?? "");
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}
