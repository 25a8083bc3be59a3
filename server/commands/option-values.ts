import { InvalidArgumentError } from "commander";
import { MillraceError } from "../../core/errors.ts";
import { defaultStatisticChoice, type StatisticChoice } from "../../core/limits/index.ts";
import {
  byGroup,
  contiguous,
  interleaved,
  leaveOneOut,
  randomly,
  type Segments,
  seededRandom,
} from "../../core/pls/index.ts";
import { parseSteps, type Step, type Table } from "../../core/spectrum/index.ts";

// Each reads one option's value as it was typed; what cannot be read is bad usage, which commander reports.

export function componentsOption(text: string): number | "auto" {
  return text === "auto" ? text : countOption(text);
}

export function countOption(text: string): number {
  if (/^[1-9]\d{0,3}$/.test(text)) return Number(text);
  throw new InvalidArgumentError("Give a whole number from 1.");
}

export function confidenceOption(text: string): number {
  const value = Number(text);
  if (text.trim() !== "" && value >= 0.5 && value < 1) return value;
  throw new InvalidArgumentError("Give a share from 0.5 to below 1, such as 0.99.");
}

export function stepsOption(text: string): Step[] {
  try {
    return parseSteps(text);
  } catch (error) {
    if (error instanceof MillraceError) throw new InvalidArgumentError(error.message);
    throw error;
  }
}

/** NAME=UNIT, gathered over repeats. */
export function unitOption(text: string, earlier: Record<string, string> = {}): Record<string, string> {
  const at = text.indexOf("=");
  if (at < 1) throw new InvalidArgumentError("Give NAME=UNIT, such as ethanol=wt%.");
  return { ...earlier, [text.slice(0, at)]: text.slice(at + 1) };
}

/** How samples are held out, as it was typed and as it is done. */
export interface Validation {
  text: string;
  segmentsOf(table: Table): Segments;
}

export function validationOption(text: string): Validation {
  const [kind, count, manner = "interleaved", seed = "1", ...rest] = text.split(":");
  if (kind === "loo" && count === undefined) return { text, segmentsOf: ({ rows }) => leaveOneOut(rows.length) };
  if (kind === "group" && count === undefined) return { text, segmentsOf: groupSegments };
  const manners = ["interleaved", "contiguous", "random"];
  if (
    kind !== "folds" ||
    !/^\d+$/.test(count ?? "") ||
    !manners.includes(manner) ||
    !/^\d+$/.test(seed) ||
    rest.length > 0
  ) {
    throw new InvalidArgumentError(
      "Give loo, group, or folds:N, folds:N:interleaved, folds:N:contiguous, folds:N:random, folds:N:random:SEED.",
    );
  }
  return {
    text: manner === "random" ? `folds:${count}:random:${seed}` : `folds:${count}:${manner}`,
    segmentsOf({ rows: { length: n } }) {
      if (manner === "random") return randomly(n, Number(count), seededRandom(Number(seed)));
      return manner === "contiguous" ? contiguous(n, Number(count)) : interleaved(n, Number(count));
    },
  };
}

function groupSegments({ rows, header }: Table): Segments {
  const nameless = rows.find(({ group }) => !group);
  if (nameless) throw new GroupError(header.file, nameless.line, header.columns.includes("group"));
  return byGroup(rows.map(({ group }) => group!));
}

class GroupError extends MillraceError {
  readonly code = "table";
  constructor(file: string, line: number, hasColumn: boolean) {
    super(
      hasColumn
        ? `${file}, line ${line}: the group is empty, expected a name. Samples without a group cannot be validated by group.`
        : `${file} is without a column "group", expected one to validate by group. Add it, or validate with loo or folds.`,
    );
  }
}

export const t2Methods = ["f", "beta", "chi-squared", "largest"] as const;
export const qMethods = ["box-moments", "box", "jackson-mudholkar", "empirical"] as const;
export const residualKinds = ["cross-validated", "fit"] as const;

/** What --t2-limit, --q-limit, --q-residuals and --confidence come to. */
export interface LimitOptions {
  confidence: number;
  t2Limit?: (typeof t2Methods)[number];
  qLimit?: (typeof qMethods)[number];
  qResiduals?: (typeof residualKinds)[number];
}

export function choiceOf({ confidence, t2Limit, qLimit, qResiduals }: LimitOptions): StatisticChoice {
  const choice = defaultStatisticChoice(confidence);
  return {
    t2:
      t2Limit === undefined ? choice.t2 : t2Limit === "largest" ? { method: t2Limit } : { method: t2Limit, confidence },
    q: { method: qLimit ?? "box-moments", residuals: qResiduals ?? "cross-validated", confidence },
    nearest: choice.nearest,
  };
}
