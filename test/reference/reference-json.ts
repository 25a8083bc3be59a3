import { readFileSync } from "node:fs";

export function referenceJson<T>(file: string): T {
  return JSON.parse(readFileSync(new URL(`data/${file}`, import.meta.url), "utf8")) as T;
}
