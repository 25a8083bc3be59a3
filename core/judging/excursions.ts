import {
  type Account,
  apartFrom,
  type Beyond,
  conditionOf,
  excursionFrom,
  excursionOf,
  extend,
  isUpper,
  type OpenExcursion,
} from "../alarms/index.ts";
import type { AlarmRule, PropertyWatch } from "../limit-set/index.ts";
import type { Excursion, Judged } from "../messages/index.ts";
import { regionsOf } from "../pls/index.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import type { Scorer } from "./scorer.ts";
import type { StreamState } from "./state.ts";
import { extrapolatedWords, short, sparseWords, unfamiliarWords } from "./words.ts";

interface Look {
  kind: string;
  /** undefined: this reading has no say, the excursion neither grows nor ends */
  outcome: Beyond | "within" | undefined;
}

/** Regions that an excursion names; more are noise. */
const mostRegions = 3;
const statistics = ["unfamiliar", "extrapolated", "sparse"];
const nothing = new Float64Array(0);

/** One judged reading through the excursions of its stream: opens, extends, joins and ends them. `state` has its alarms. Pure. */
export function runExcursions(
  state: StreamState,
  judged: Judged,
  rules: StreamRules,
): [StreamState, Note[], Excursion[]] {
  let open = state.excursions;
  const notes: Note[] = [];
  const changed: Excursion[] = [];
  for (const { kind, outcome } of looks(judged, rules)) {
    const before = open[kind];
    if (outcome === undefined || (outcome === "within" && !before)) continue;
    if (outcome === "within") {
      const within = before.within + 1;
      const known = before.readings >= excursionFrom;
      // What comes beyond the limit again at once is the same excursion; a single reading beyond it was none.
      if (known && within < apartFrom) {
        open = { ...open, [kind]: { ...before, within } };
        continue;
      }
      const { [kind]: _, ...others } = open;
      open = others;
      if (!known) continue;
      const excursion = ended(kind, before, "returned", rules);
      changed.push(excursion);
      notes.push(noteOf(excursion, judged.time));
      continue;
    }
    const extended = extend(before, outcome, contributionsTo(kind, rules.scorer), (made) => account(kind, made, rules));
    const after = linked(extended, kind, state, rules);
    open = { ...open, [kind]: after };
    if (after.readings < excursionFrom) continue;
    const excursion = excursionOf(rules.stream, kind, after);
    changed.push(excursion);
    if (after.readings === excursionFrom) notes.push(noteOf(excursion, judged.time));
  }
  return [open === state.excursions ? state : { ...state, excursions: open }, notes, changed];
}

/** Ends every open excursion: the data stop here. */
export function endExcursions(
  state: StreamState,
  how: "gap" | "returned",
  rules: StreamRules,
): [StreamState, Note[], Excursion[]] {
  const excursions = Object.entries(state.excursions)
    .filter(([, open]) => open.readings >= excursionFrom)
    // One that was within its limit again before the data stopped had returned; it only waited to be joined.
    .map(([kind, open]) => ended(kind, open, open.within > 0 ? "returned" : how, rules));
  return [{ ...state, excursions: {} }, excursions.map((excursion) => noteOf(excursion, excursion.end!)), excursions];
}

/** The open excursions of a stream as they are shown. */
export function openExcursions(state: StreamState, rules: StreamRules): Excursion[] {
  return Object.entries(state.excursions)
    .filter(([, open]) => open.readings >= excursionFrom)
    .map(([kind, open]) => excursionOf(rules.stream, kind, open));
}

/** With the last word on what made it: all its readings together. */
function ended(kind: string, open: OpenExcursion, how: "gap" | "returned", rules: StreamRules): Excursion {
  return excursionOf(rules.stream, kind, { ...open, ...account(kind, open.made, rules) }, how);
}

function contributionsTo(kind: string, scorer: Scorer | undefined): Float64Array {
  if (kind === "unfamiliar") return scorer?.contributions.q() ?? nothing;
  return kind === "extrapolated" ? (scorer?.contributions.t2(scorer.onAxis) ?? nothing) : nothing;
}

function account(kind: string, made: readonly number[], rules: StreamRules): Account {
  const { scorer } = rules;
  const fits = scorer !== undefined && made.length > 0 && made.length === scorer.contributions.axis.points.length;
  const regions = fits ? regionsOf(made, scorer.contributions.axis).slice(0, mostRegions) : [];
  const explained = { qRegions: regions, t2Regions: regions, slopes: scorer?.slopes ?? false };
  switch (kind) {
    case "unfamiliar":
      return { regions, says: unfamiliarWords(explained) };
    case "extrapolated":
      return { regions, says: extrapolatedWords(explained) };
    case "sparse":
      return { regions, says: sparseWords };
    default:
      return { regions, says: propertyWords(kind, rules) };
  }
}

function propertyWords(key: string, rules: StreamRules): string {
  const rule = rules.limitSet.alarms.find((candidate) => candidate.key === key);
  if (rule?.watches.kind !== "property") return "";
  return `${rule.title}: limit ${short(rule.watches.limit)}\u202f${unitOf(rule.watches, rules)}.`;
}

function unitOf({ property }: PropertyWatch, { scorer }: StreamRules): string {
  return scorer?.compiled.properties.find(({ name }) => name === property)?.unit ?? "";
}

/** With the alarms that stand for it now and were not named yet. */
function linked(open: OpenExcursion, kind: string, state: StreamState, rules: StreamRules): OpenExcursion {
  let { alarms } = open;
  for (const rule of rules.limitSet.alarms) {
    const alarm = state.alarms[rule.key];
    if (!alarm?.active || !alarm.activation || !speaksOf(rule, kind)) continue;
    const { raisedAt } = alarm.activation;
    if (!alarms.some((known) => known.key === rule.key && known.raisedAt === raisedAt)) {
      alarms = [...alarms, { key: rule.key, raisedAt }];
    }
  }
  return alarms === open.alarms ? open : { ...open, alarms };
}

function speaksOf({ key, watches }: AlarmRule, kind: string): boolean {
  if (watches.kind === "property") return key === kind;
  return watches.kind === kind || (watches.kind === "drifting" && kind === "unfamiliar");
}

function looks(judged: Judged, rules: StreamRules): Look[] {
  const { t2, q, nearest } = judged.ratios;
  const near = judged.verdict.includes("sparse") || nearest === null ? nearest : 0;
  const ratios = [q, t2, near];
  return [
    ...statistics.map((kind, i) => ({ kind, outcome: outcomeOf(judged, ratios[i]) })),
    ...propertyLooks(judged, rules),
  ];
}

function outcomeOf(judged: Judged, ratio: number | null): Look["outcome"] {
  if (ratio === null) return undefined;
  return ratio > 1 ? { at: judged.time, reach: ratio, shown: ratio, unit: "× limit" } : "within";
}

function propertyLooks(judged: Judged, rules: StreamRules): Look[] {
  return rules.limitSet.alarms.flatMap((rule): Look[] => {
    const { watches } = rule;
    if (watches.kind !== "property") return [];
    const value = judged.properties[watches.property]?.value ?? Number.NaN;
    const condition = conditionOf(rule, judged, { unusable: [], frozen: false });
    if (condition === "none") return [{ kind: rule.key, outcome: undefined }];
    // Within the deadband the value is no longer beyond its limit: the alarm may stand, the excursion is over.
    if (condition !== "beyond") return [{ kind: rule.key, outcome: "within" }];
    const reach = isUpper(watches) ? value : -value;
    return [{ kind: rule.key, outcome: { at: judged.time, reach, shown: value, unit: unitOf(watches, rules) } }];
  });
}

function noteOf(excursion: Excursion, at: number): Note {
  const { stream, kind, ended, peak, unit } = excursion;
  const what = ended === undefined ? "began" : "ended";
  const how = ended === "gap" ? " (no data after it)" : "";
  return {
    at,
    stream,
    kind: `excursion ${what}`,
    says: `${kind}: ${what}${how}, peak ${short(peak)} ${unit}. ${excursion.says}`,
    excursion,
  };
}
