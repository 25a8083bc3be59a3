import { InvalidArgumentError } from "commander";
import { type PlantStreamId, streamIds } from "../plant/index.ts";

/** RFC 3339 with offset, or epoch milliseconds. */
export function moment(text: string): number {
  const time = /^\d{10,}$/.test(text) ? Number(text) : rfc3339(text);
  if (Number.isFinite(time)) return time;
  throw new InvalidArgumentError(
    `"${text}" is no moment: give RFC 3339 with an offset, as 2026-03-01T06:00:00Z, or epoch milliseconds.`,
  );
}

function rfc3339(text: string): number {
  return /^\d{4}-\d\d-\d\d[Tt ]\d\d:\d\d:\d\d(\.\d+)?([Zz]|[+-]\d\d:\d\d)$/.test(text) ? Date.parse(text) : Number.NaN;
}

export function wholeNumber(least: number, most: number) {
  return (text: string): number => {
    const value = Number(text);
    if (Number.isInteger(value) && value >= least && value <= most) return value;
    throw new InvalidArgumentError(`"${text}" is not a whole number from ${least} to ${most}.`);
  };
}

export function positive(text: string): number {
  const value = Number(text);
  if (Number.isFinite(value) && value > 0) return value;
  throw new InvalidArgumentError(`"${text}" is not a number above 0.`);
}

export const seedNumber = wholeNumber(0, 2 ** 31 - 1);
/** Shorter periods than this leave no whole millisecond to each of the three streams. */
export const periodNumber = wholeNumber(3, 86_400_000);

export function streamId(text: string, before: PlantStreamId[] | undefined): PlantStreamId[] {
  const known = streamIds.find((id) => id === text);
  if (known) return [...new Set([...(before ?? []), known])];
  throw new InvalidArgumentError(`"${text}" is no stream of the plant: ${streamIds.join(", ")}.`);
}
