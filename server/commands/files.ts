import { randomBytes } from "node:crypto";
import { readFile, rename, rm, writeFile } from "node:fs/promises";
import { MillraceError } from "../../core/errors.ts";
import { type Model, parseModel } from "../../core/model/index.ts";
import { type Axis, parseTable, type Table } from "../../core/spectrum/index.ts";

/** A file that cannot be read or written. */
export class FileError extends MillraceError {
  readonly code = "file";
  constructor(file: string, does: "read" | "written", cause: unknown) {
    const why =
      (cause as NodeJS.ErrnoException).code === "ENOENT" ? "there is no such file or folder" : (cause as Error).message;
    super(`${file} cannot be ${does}: ${why}. Check the path and its permissions.`, { cause });
  }
}

/** @throws FileError */
export async function readText(file: string): Promise<string> {
  try {
    return await readFile(file, "utf8");
  } catch (cause) {
    throw new FileError(file, "read", cause);
  }
}

/** The whole file or none of it: written beside its place and moved there. @throws FileError */
export async function writeWhole(file: string, text: string): Promise<void> {
  const beside = `${file}.${randomBytes(4).toString("hex")}.part`;
  try {
    await writeFile(beside, text);
    await rename(beside, file);
  } catch (cause) {
    await rm(beside, { force: true });
    throw new FileError(file, "written", cause);
  }
}

export async function readTable(file: string, unit: Axis["unit"]): Promise<Table> {
  return parseTable(await readText(file), file, unit);
}

export async function readModel(file: string): Promise<Model> {
  return parseModel(await readText(file), file);
}
