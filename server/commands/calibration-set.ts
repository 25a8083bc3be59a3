import { MillraceError } from "../../core/errors.ts";
import type { CalibrationSet } from "../../core/pls/index.ts";
import type { Table } from "../../core/spectrum/index.ts";

/** A name that was asked for and is not in the table. */
export class MissingNameError extends MillraceError {
  readonly code = "table";
  constructor(what: string, name: string, file: string, there: readonly string[]) {
    const some = there.slice(0, 12).join(", ") + (there.length > 12 ? ` … (${there.length})` : "");
    super(`${what} "${name}" is not in ${file}, expected one of: ${some || "none"}. Correct the name.`);
  }
}

/** The table without the samples that a person excludes. @throws MissingNameError for a sample that is not there */
export function withoutExcluded(table: Table, excluded: readonly string[]): Table {
  const names = table.rows.map(({ sample }) => sample);
  for (const name of excluded) {
    if (!names.includes(name)) throw new MissingNameError("the excluded sample", name, table.header.file, names);
  }
  return { header: table.header, rows: table.rows.filter(({ sample }) => !excluded.includes(sample)) };
}

/** Spectra and reference values of the properties; a missing value stays NaN. @throws MissingNameError for a property that is not there */
export function calibrationSetOf({ header, rows }: Table, properties: readonly string[]): CalibrationSet {
  for (const name of properties) {
    if (!header.properties.includes(name))
      throw new MissingNameError("the property", name, header.file, header.properties);
  }
  return {
    spectra: { axis: header.axis, rows: rows.map(({ values }) => values), names: rows.map(({ sample }) => sample) },
    y: rows.map(({ references }) => Float64Array.from(properties, (name) => references[name])),
    propertyNames: properties,
  };
}
