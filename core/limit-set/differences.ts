import type { LimitSet } from "./limit-set.ts";

/** One setting that two limit sets do not share. `what` names it as a person would look for it: `unfamiliar › onDelay › readings`. */
export interface Difference {
  what: string;
  /** undefined: the first set does not have it */
  before?: string;
  after?: string;
}

type Judging = Pick<LimitSet, "statistics" | "alarms">;

/** Everything in which two limit sets judge differently: statistics first, then alarm by alarm. Author, reason and time are not compared. */
export function differences(before: Judging, after: Judging): Difference[] {
  const byKey = ({ alarms }: Judging) => Object.fromEntries(alarms.map(({ key, ...rule }) => [key, rule]));
  return [...compare(before.statistics, after.statistics, []), ...compare(byKey(before), byKey(after), [])];
}

function compare(before: unknown, after: unknown, path: readonly string[]): Difference[] {
  if (isRecord(before) && isRecord(after)) {
    const keys = [...new Set([...Object.keys(before), ...Object.keys(after)])];
    return keys.flatMap((key) => compare(before[key], after[key], [...path, key]));
  }
  const [old, now] = [words(before), words(after)];
  if (old === now) return [];
  return [
    {
      what: path.join(" › "),
      ...(old === undefined ? {} : { before: old }),
      ...(now === undefined ? {} : { after: now }),
    },
  ];
}

function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === "object" && value !== null && !Array.isArray(value);
}

/** A whole alarm that is there on one side only is named by its title. */
function words(value: unknown): string | undefined {
  if (value === undefined) return undefined;
  if (isRecord(value)) return typeof value.title === "string" ? `alarm "${value.title}"` : JSON.stringify(value);
  return Array.isArray(value) ? value.join(", ") : String(value);
}
