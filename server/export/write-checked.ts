import { createHash } from "node:crypto";
import { existsSync } from "node:fs";
import { open, rename, rm } from "node:fs/promises";
import { basename } from "node:path";
import { writeWhole } from "../commands/files.ts";
import { ExportError } from "./export-error.ts";

/** Text gathered before it is written. */
const portionBytes = 256 * 1024;

export interface Written {
  lines: number;
  bytes: number;
  /** of the whole file, in hexadecimal */
  sha256: string;
}

/**
 * Writes lines to a new file, all of them or none: beside its place first. Its SHA-256 (FIPS 180-4) goes into `<file>.sha256`, in the form that
 * `sha256sum --check` reads.
 *
 * @throws ExportError when the file is there already
 */
export async function writeChecked(file: string, lines: Iterable<string>): Promise<Written> {
  if (existsSync(file)) throw new ExportError(`${file} is there already, expected a new file. Name another.`);
  const beside = `${file}.part`;
  const written = { lines: 0, bytes: 0 };
  const hash = createHash("sha256");
  const handle = await open(beside, "w");
  try {
    for (const text of portions(lines, () => written.lines++)) {
      const bytes = Buffer.from(text);
      hash.update(bytes);
      written.bytes += bytes.length;
      await handle.writeFile(bytes);
    }
    await handle.sync();
    await handle.close();
    const sha256 = hash.digest("hex");
    await rename(beside, file);
    await writeWhole(`${file}.sha256`, `${sha256}  ${basename(file)}\n`);
    return { ...written, sha256 };
  } catch (error) {
    await handle.close().catch(() => {});
    await rm(beside, { force: true });
    throw error;
  }
}

function* portions(lines: Iterable<string>, each: () => void): Generator<string> {
  let text = "";
  for (const line of lines) {
    each();
    text += line;
    if (text.length < portionBytes) continue;
    yield text;
    text = "";
  }
  yield text;
}
