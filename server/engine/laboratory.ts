import { pairOf, promisedOf, searchedFor, whyNotTaken } from "../../core/agreement/index.ts";
import { defaultLaboratory, hearLaboratory, type Note, type StreamRules } from "../../core/judging/index.ts";
import type {
  AxisSpec,
  Judged,
  LabIdentity,
  LabOrigin,
  LabPair,
  LabResult,
  LabRow,
} from "../../core/messages/index.ts";
import type { LabEntry } from "./decode-lab.ts";
import type { EngineStream } from "./streams.ts";

/** What a person or a program asks of the laboratory results of a stream. */
export type LabCommand =
  | { kind: "enter lab results"; stream: string; rows: EnteredRow[]; origin: LabOrigin; by: string }
  | { kind: "correct lab result"; stream: string; result: LabIdentity; value: number; reason: string; by: string }
  | { kind: "withdraw lab result"; stream: string; result: LabIdentity; reason: string; by: string };

/** A row of a table (a form has one); `refused` where it could not even be read, with what is wrong. */
export type EnteredRow = { row: number } & ({ entry: LabEntry } | { refused: string });

/** A reading with its spectrum, where that is kept. */
export interface NearReading {
  judged: Judged;
  values: Float64Array | null;
  axis?: AxisSpec;
}

/** What the record knows, this turn included. */
export interface LabRecord {
  readings: (from: number, to: number) => NearReading[];
  known: (identity: LabIdentity) => LabResult | undefined;
}

/** What came of it: the stream as it is then, new versions of results, and what goes on record. */
export interface LabCarried {
  state: EngineStream["state"];
  results: LabResult[];
  notes: Note[];
  rows?: LabRow[];
  rejected?: string;
}

interface Entering {
  origin: LabOrigin;
  by: string;
  /** when it came in: wall clock; the process time of then for recorded history */
  at: number;
}

type Taken = { kind: "new"; result: LabResult } | { kind: "repeat" } | { kind: "refused"; says: string };

/** Carries out a command at `now`, wall clock. Of a table every row is taken, or none. Pure but for the scorer's own room. */
export function carryOutLab(stream: EngineStream, command: LabCommand, now: number, record: LabRecord): LabCarried {
  if (command.kind !== "enter lab results") return changeResult(stream, command, now, record);
  return enterResults(stream, command.rows, { origin: command.origin, by: command.by, at: now }, record);
}

/** New results of one stream, in any order. */
export function enterResults(
  stream: EngineStream,
  entered: readonly EnteredRow[],
  about: Entering,
  record: LabRecord,
): LabCarried {
  const found: LabResult[] = [];
  const known = (identity: LabIdentity) => found.find((result) => isSame(result, identity)) ?? record.known(identity);
  const rows = entered.map((each): LabRow => {
    const { row } = each;
    if ("refused" in each) return { row, outcome: "refused", says: each.refused };
    const taken = take(stream.rules, each.entry, about, { ...record, known });
    switch (taken.kind) {
      case "new":
        found.push(taken.result);
        return { row, outcome: "accepted", says: pairWords(taken.result.pair, taken.result.unit) };
      case "repeat":
        return { row, outcome: "already there", says: "The same result is on record: nothing changes." };
      default:
        return { row, outcome: "refused", says: taken.says };
    }
  });
  const refused = rows.filter(({ outcome }) => outcome === "refused");
  if (refused.length > 0) {
    const rejected = `${refused.length} of ${rows.length} rows refused, so nothing was taken`;
    return { state: stream.state, results: [], notes: [], rows, rejected };
  }
  return { ...heardAll(stream, found, about), rows };
}

/** In the order in which their samples were drawn, as the alarms count them. */
function heardAll({ state, rules }: EngineStream, results: LabResult[], { at, by, origin }: Entering): LabCarried {
  let next = state;
  const notes: Note[] = [];
  for (const result of results.toSorted((a, b) => a.time - b.time)) {
    const says = `${resultWords(result)}. ${pairWords(result.pair, result.unit)}`;
    const who = origin === "history" ? {} : { by };
    notes.push({ at, stream: rules.stream, kind: "lab result", says, ...who });
    const [heard, alarmNotes] = hearLaboratory(next, result, rules);
    next = heard;
    notes.push(...alarmNotes);
  }
  return { state: next, results, notes };
}

function take(rules: StreamRules, entry: LabEntry, { origin, by, at }: Entering, record: LabRecord): Taken {
  const { laboratory: own = defaultLaboratory, scorer, gapMs } = rules;
  const properties = scorer?.compiled.properties ?? [];
  const wrong = whyNotTaken(entry, properties, own.plausible);
  if (wrong !== undefined) return { kind: "refused", says: wrong };
  const { property, time, value, unit, method = "", sample = "" } = entry;
  if (time > at + rules.futureToleranceMs)
    return { kind: "refused", says: "its sample was drawn in the future. Check the date." };
  const known = record.known({ property, time, method, sample });
  if (known) return asKnown(known, value);
  const index = properties.findIndex(({ name }) => name === property);
  const pairing = { ...own, gapMs, mostMove: promisedOf(scorer!.compiled.model, index)?.rmsecv };
  const { from, to } = searchedFor(time, pairing);
  const paired = pairOf(time, { name: property, unit }, record.readings(from, to), pairing);
  if (paired.kind === "no readings") return { kind: "refused", says: paired.says };
  const pair: LabPair = { ...paired.pair, scores: meanScores(paired.used, rules) };
  const result: LabResult = {
    ...{ stream: rules.stream, property, time, method, sample, value, unit, by: entry.by ?? by },
    ...{ receivedAt: at, origin, version: 1, withdrawn: false, changes: [], pair },
  };
  return { kind: "new", result };
}

function asKnown({ value: known, unit, withdrawn, changes }: LabResult, value: number): Taken {
  if (withdrawn) {
    const { by, reason } = changes.at(-1)!;
    return {
      kind: "refused",
      says: `this result was withdrawn by ${by}: ${reason} Give another method or sample name for a new one.`,
    };
  }
  const everSaid = [known, ...changes.map(({ was }) => was)];
  if (everSaid.includes(value)) return { kind: "repeat" };
  return {
    kind: "refused",
    says: `the same sample has ${known} ${unit} on record, got ${value} ${unit}. Correct that one, with a reason.`,
  };
}

/** t of the readings behind a pair, mean by component; null when a spectrum is no longer kept or another model is in charge now. */
function meanScores(used: readonly NearReading[], { scorer }: StreamRules): number[] | null {
  if (!scorer || used.some(({ judged, values }) => values === null || judged.model !== scorer.compiled.id)) return null;
  if (used.some(({ judged }) => judged.verdict[0] === "unusable")) return null;
  const sum = new Array<number>(scorer.compiled.components).fill(0);
  for (const { values, axis } of used) {
    const { scores } = scorer.run(values!, axis);
    for (let a = 0; a < sum.length; a++) sum[a] += scores[a] / used.length;
  }
  return sum;
}

type Change = Exclude<LabCommand, { kind: "enter lab results" }>;

/** A correction or a withdrawal: a new version with its reason; the one before stays on record. */
function changeResult({ state, rules }: EngineStream, command: Change, now: number, record: LabRecord): LabCarried {
  const { result: identity, reason, by } = command;
  const known = record.known(identity);
  const rejected = whyNotChanged(known, command, rules);
  if (!known || rejected !== undefined) {
    const says = `${command.kind} by ${by} rejected: ${rejected}.`;
    return {
      state,
      results: [],
      notes: [{ at: now, stream: rules.stream, kind: "command rejected", says, by }],
      rejected,
    };
  }
  const withdrawn = command.kind === "withdraw lab result";
  const kind = withdrawn ? ("withdrawn" as const) : ("corrected" as const);
  const result: LabResult = {
    ...known,
    value: withdrawn ? known.value : command.value,
    version: known.version + 1,
    withdrawn,
    changes: [...known.changes, { kind, was: known.value, by, at: now, reason }],
  };
  const change = withdrawn ? "withdrawn" : `corrected to ${result.value} ${result.unit}`;
  const says = `${resultWords(known)}: ${change}. ${reason}`;
  const [heard, notes] = hearLaboratory(state, result, rules);
  return {
    state: heard,
    results: [result],
    notes: [{ at: now, stream: rules.stream, kind: `lab result ${kind}`, says, by }, ...notes],
  };
}

function whyNotChanged(known: LabResult | undefined, command: Change, rules: StreamRules): string | undefined {
  if (command.reason.trim() === "") return "a reason is missing";
  if (!known) return `${command.stream} has no such result of ${command.result.property} on record`;
  if (known.withdrawn) return "it was withdrawn before";
  if (command.kind === "withdraw lab result") return undefined;
  if (command.value === known.value) return `it is ${known.value} ${known.unit} already`;
  const properties = rules.scorer?.compiled.properties ?? [];
  return whyNotTaken({ ...known, value: command.value }, properties, rules.laboratory?.plausible)?.replace(/\.$/, "");
}

function isSame(a: LabIdentity, b: LabIdentity): boolean {
  return a.property === b.property && a.time === b.time && a.method === b.method && a.sample === b.sample;
}

function resultWords({ property, value, unit, method, sample, time }: LabResult): string {
  const how = method && ` by ${method}`;
  const which = sample && `, sample ${sample}`;
  return `${property} ${value} ${unit}${how}${which}, drawn at ${new Date(time).toISOString()}`;
}

function pairWords({ predicted, apart, says }: LabPair, unit: string): string {
  if (apart !== null) return says;
  return `Predicted: ${Number(predicted?.toPrecision(5))} ${unit}.${says && ` ${says}`}`;
}
