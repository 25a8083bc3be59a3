import type { Finding, Stretch } from "../messages/index.ts";

/** How a number of the property and a moment of the plant are written. */
export interface Writing {
  /** a difference with its sign and unit: "+0.31 wt%" */
  difference: (value: number) => string;
  /** a size with its unit: "0.17 wt%" */
  size: (value: number) => string;
  /** "14 May, 08:00" in the plant's zone */
  moment: (time: number) => string;
}

/**
 * A finding in words, the most important sentence first: what holds now and since when, how sure that is, what the scatter does, what was
 * before. Says how far predictions and laboratory are apart, never which of the two is right.
 */
export function findingWords(finding: Finding, write: Writing): string[] {
  const { stretches, stage } = finding;
  const present = stretches.at(-1);
  if (!present) return ["No pair counts yet: results of the laboratory come in by form, by table or by message."];
  const earlier = stretches.slice(0, -1).filter(({ biased }) => biased);
  return [
    presentWords(finding, present, write),
    ...scatterWords(finding, write),
    ...(finding.slopeOff ? ["The slope is not 1: the difference depends on the level."] : []),
    ...(finding.odd > 0 ? ["One pair stands out from all others: look into it before the figures are used."] : []),
    ...earlier.map((stretch) => earlierWords(stretch, write)),
    stageWords(stage),
  ];
}

/** The first sentence alone, for a list: "biased by +0.31 wt% since 14 May, 08:00 (n = 17, p = 0.002)". */
export function findingInShort({ stretches, stage }: Finding, write: Writing): string {
  const present = stretches.at(-1);
  if (!present) return "no pair counts yet";
  const evidence = `n = ${present.n}, p ${pWords(present.p)}`;
  if (present.biased) {
    return `biased by ${write.difference(present.bias.value)} since ${write.moment(present.from)} (${evidence})`;
  }
  if (stage.stage === "too few") return `no bias seen in ${stage.n} pairs, too few to say that there is none`;
  return `no bias (${write.difference(present.bias.value)}, ${evidence})`;
}

function presentWords({ stage }: Finding, present: Stretch, write: Writing): string {
  const evidence = `n = ${present.n}, p ${pWords(present.p)}`;
  if (present.biased) {
    const side = present.bias.value > 0 ? "above" : "below";
    return `Biased by ${write.difference(present.bias.value)} since ${write.moment(present.from)} (${evidence}): the predictions lie ${side} the laboratory. Either may be off.`;
  }
  const { value, low, high } = present.bias;
  const margin = low === null || high === null ? "" : ` ± ${write.size((high - low) / 2)}`;
  const sure = stage.stage === "too few" ? "No bias seen so far" : "No bias";
  return `${sure}: the predictions differ from the laboratory by ${write.difference(value)}${margin} on average (${evidence}).`;
}

function scatterWords({ scatter, rmsecv, scatterGrown }: Finding, write: Writing): string[] {
  if (scatter === null || rmsecv === null || scatterGrown === null) return [];
  const beside = `(${write.size(scatter)}; the model's RMSECV is ${write.size(rmsecv)})`;
  return [scatterGrown ? `The scatter has grown ${beside}.` : `The scatter has not grown ${beside}.`];
}

function earlierWords({ from, to, bias, n, p }: Stretch, write: Writing): string {
  return `Before: biased by ${write.difference(bias.value)} from ${write.moment(from)} to ${write.moment(to)} (n = ${n}, p ${pWords(p)}).`;
}

function stageWords({ stage, n, missing, span }: Finding["stage"]): string {
  const spanned = `They span ${Math.round(100 * span)} % of the calibrated range.`;
  switch (stage) {
    case "too few":
      return `${n} ${n === 1 ? "pair counts" : "pairs count"}; ${missing} more make a first judgement.`;
    case "first judgement":
      return `${n} pairs: a first judgement; ${missing} more, over level and composition, make a full one. ${spanned}`;
    default:
      return `${n} pairs: enough for a full judgement where they span level and composition. ${spanned}`;
  }
}

/** "= 0.002", "< 0.001", not to be broken between lines */
export function pWords(p: number): string {
  if (p < 0.001) return "<\u00a00.001";
  return `=\u00a0${p < 0.01 ? p.toFixed(3) : p.toFixed(2)}`;
}
