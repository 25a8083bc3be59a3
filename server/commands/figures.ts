/** A number for people: so many significant digits, no exponent where a person would not write one. */
export function figure(value: number | undefined | null, digits = 4): string {
  if (value === undefined || value === null || !Number.isFinite(value)) return "–";
  if (value === 0) return "0";
  const size = Math.abs(value);
  if (size >= 1e6 || size < 1e-4) return value.toExponential(digits - 1);
  const decimals = Math.max(0, digits - 1 - Math.floor(Math.log10(size)));
  return value.toFixed(decimals);
}

/** Rows as columns of equal width, the first to the left, the others to the right. */
export function columns(rows: readonly (readonly string[])[]): string {
  const widths = rows[0].map((_, k) => Math.max(...rows.map((row) => row[k].length)));
  return rows
    .map((row) =>
      row
        .map((cell, k) => (k === 0 ? cell.padEnd(widths[k]) : cell.padStart(widths[k])))
        .join("  ")
        .trimEnd(),
    )
    .join("\n");
}
