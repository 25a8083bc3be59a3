import { readText } from "./files.ts";
import { ImportError } from "./import-error.ts";

/**
 * Reads a CSV of numbers alone as rows × columns. It may lie on its side where the wanted shape leaves no doubt.
 *
 * @param rows wanted number, or undefined for any
 * @param columns wanted number, or undefined for any
 * @param what the shape in words, for the error
 * @throws ImportError naming file and line, or the shape that was found; FileError
 */
export async function readMatrix(
  file: string,
  rows: number | undefined,
  columns: number | undefined,
  what: string,
): Promise<number[][]> {
  const lines = (await readText(file)).replace(/^\uFEFF/, "").split(/\r?\n/);
  while (lines.at(-1)?.trim() === "") lines.pop();
  const matrix = lines.map((line, i) => numbersOf(line, `${file}, line ${i + 1}`));
  const width = matrix[0]?.length ?? 0;
  const uneven = matrix.findIndex((row) => row.length !== width);
  if (uneven >= 0)
    throw new ImportError(`${file}, line ${uneven + 1}`, `${matrix[uneven].length} numbers`, `${width}, as line 1 has`);
  const fits = (r: number, c: number) => (rows === undefined || r === rows) && (columns === undefined || c === columns);
  if (width > 0 && fits(matrix.length, width)) return matrix;
  if (width > 0 && fits(width, matrix.length)) return matrix[0].map((_, k) => matrix.map((row) => row[k]));
  const wanted = [rows, columns].map((size) => size ?? "any").join(" × ");
  throw new ImportError(file, `${matrix.length} × ${width} numbers`, `${wanted} (${what})`);
}

/** One number for each of something, in a row or a column. */
export async function readVector(file: string, length: number | undefined, what: string): Promise<number[]> {
  const matrix = await readMatrix(file, undefined, undefined, what);
  const flat = matrix.length === 1 ? matrix[0] : matrix.map((row) => row[0]);
  const isVector = matrix.length === 1 || matrix[0].length === 1;
  if (isVector && (length === undefined || flat.length === length)) return flat;
  throw new ImportError(
    file,
    `${matrix.length} × ${matrix[0]?.length ?? 0} numbers`,
    `one row or column of ${length ?? "any number of"} ${what}`,
  );
}

function numbersOf(line: string, where: string): number[] {
  return line.split(",").map((cell) => {
    const text = cell.trim();
    const value = Number(text);
    if (text !== "" && Number.isFinite(value)) return value;
    throw new ImportError(
      where,
      text === "" ? "an empty cell" : `"${text.slice(0, 40)}"`,
      "numbers separated by commas, without a header",
    );
  });
}
