import { type Beyond, conditionOf, excursionFrom, excursionOf, extend, isUpper } from "../alarms/index.ts";
import type { Excursion, Judged } from "../messages/index.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import type { StreamState } from "./state.ts";
import { extrapolatedWords, nothingExplained, short, sparseWords, unfamiliarWords } from "./words.ts";

interface Look {
  kind: string;
  /** undefined: this reading has no say, the excursion neither grows nor ends */
  outcome: Beyond | "within" | undefined;
  describe: () => string;
}

/** One judged reading through the excursions of its stream: opens, extends and ends them. Pure. */
export function runExcursions(
  state: StreamState,
  judged: Judged,
  rules: StreamRules,
): [StreamState, Note[], Excursion[]] {
  let open = state.excursions;
  const notes: Note[] = [];
  const changed: Excursion[] = [];
  for (const { kind, outcome, describe } of looks(judged, rules)) {
    const before = open[kind];
    if (outcome === undefined || (outcome === "within" && !before)) continue;
    if (outcome === "within") {
      const { [kind]: _, ...others } = open;
      open = others;
      if (before.readings >= excursionFrom) {
        const excursion = excursionOf(rules.stream, kind, before, "returned");
        changed.push(excursion);
        notes.push(noteOf(excursion, judged.time));
      }
      continue;
    }
    const after = extend(before, outcome, describe);
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
  ended: "gap" | "returned",
  rules: StreamRules,
): [StreamState, Note[], Excursion[]] {
  const excursions = Object.entries(state.excursions)
    .filter(([, open]) => open.readings >= excursionFrom)
    .map(([kind, open]) => excursionOf(rules.stream, kind, open, ended));
  return [{ ...state, excursions: {} }, excursions.map((excursion) => noteOf(excursion, excursion.end!)), excursions];
}

/** The open excursions of a stream as they are shown. */
export function openExcursions(state: StreamState, rules: StreamRules): Excursion[] {
  return Object.entries(state.excursions)
    .filter(([, open]) => open.readings >= excursionFrom)
    .map(([kind, open]) => excursionOf(rules.stream, kind, open));
}

function looks(judged: Judged, rules: StreamRules): Look[] {
  const explained = () => rules.scorer?.explained() ?? nothingExplained;
  const statistic = (kind: string, ratio: number | null, describe: () => string): Look => ({
    kind,
    outcome: ratio === null ? undefined : ratio > 1 ? beyond(judged, ratio, ratio, "× limit") : "within",
    describe,
  });
  return [
    statistic("unfamiliar", judged.ratios.q, () => unfamiliarWords(explained())),
    statistic("extrapolated", judged.ratios.t2, () => extrapolatedWords(explained())),
    statistic(
      "sparse",
      judged.verdict.includes("sparse") || judged.ratios.nearest === null ? judged.ratios.nearest : 0,
      () => sparseWords,
    ),
    ...propertyLooks(judged, rules),
  ];
}

function propertyLooks(judged: Judged, rules: StreamRules): Look[] {
  return rules.limitSet.alarms.flatMap((rule): Look[] => {
    const { watches } = rule;
    if (watches.kind !== "property") return [];
    const value = judged.properties[watches.property]?.value ?? Number.NaN;
    const unit = rules.scorer?.compiled.properties.find(({ name }) => name === watches.property)?.unit ?? "";
    const condition = conditionOf(rule, judged, {
      unusable: [],
      frozen: false,
    });
    const reach = isUpper(watches) ? value : -value;
    return [
      {
        kind: rule.key,
        // Within the deadband the value is no longer beyond its limit: the alarm may stand, the excursion is over.
        outcome:
          condition === "none" ? undefined : condition === "beyond" ? beyond(judged, reach, value, unit) : "within",
        describe: () => `${rule.title}: limit ${short(watches.limit)}\u202f${unit}.`,
      },
    ];
  });
}

function beyond(judged: Judged, reach: number, shown: number, unit: string): Beyond {
  return { at: judged.time, reach, shown, unit };
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
