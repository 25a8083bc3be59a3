import { readFileSync } from "node:fs";

/** The package's version; dist/server lies two folders below it. */
export const version = (
  JSON.parse(readFileSync(new URL("../../package.json", import.meta.url), "utf8")) as { version: string }
).version;
