import type { Judged, Region } from "../messages/index.ts";

/** A number of about three digits: 3.4, 12, 0.31. */
export function short(value: number): string {
  if (!Number.isFinite(value)) return String(value);
  const size = Math.abs(value);
  if (size >= 100) return value.toFixed(0);
  if (size >= 10) return value.toFixed(1);
  return value.toPrecision(2);
}

/** Whole numbers with a narrow space between thousands: 1 724. */
export function grouped(value: number): string {
  return String(Math.round(value)).replace(/\B(?=(\d{3})+(?!\d))/g, "\u202f");
}

const unitWord = { nm: "nm", "cm-1": "cm⁻¹" } as const;

/** 1 724–1 768 nm */
export function rangeWords({ from, to, unit }: Pick<Region, "from" | "to" | "unit">): string {
  const [low, high] = from < to ? [from, to] : [to, from];
  return low === high ? `${grouped(low)} ${unitWord[unit]}` : `${grouped(low)}–${grouped(high)} ${unitWord[unit]}`;
}

/** What the words are made of. */
export interface Explained {
  qRegions: readonly Region[];
  t2Regions: readonly Region[];
  /** the model's steps take a derivative: a residual then tells of a slope, and "more" or "less" would be wrong */
  slopes: boolean;
}

/** "1 724–1 768 nm gives 81 % of Q: more absorption than the model can explain." Says where it differs, never what causes it. */
export function unfamiliarWords({ qRegions: [first], slopes }: Explained): string {
  if (!first) return "No region of the spectrum stands out in Q.";
  const how = slopes ? "a shape" : first.sign >= 0 ? "more absorption" : "less absorption";
  const than = slopes ? "that the calibration never saw" : "than the model can explain";
  return `${rangeWords(first)} gives ${percent(first.share)} of Q: ${how} ${than}.`;
}

/** "1 180–1 220 nm gives 54 % of T²: the known ingredients are in amounts outside the calibration." */
export function extrapolatedWords({ t2Regions: [first] }: Explained): string {
  const where = first ? `${rangeWords(first)} gives ${percent(first.share)} of T²: ` : "";
  return `${where}known ingredients, in amounts outside the calibration.`;
}

export const sparseWords = "No calibration sample lies near this reading: the model has no experience here.";

function percent(share: number): string {
  return `${Math.round(share * 100)} %`;
}

/** One sentence for a judged reading: its worst verdict first, with what made it. */
export function readingWords(judged: Judged, explained: Explained): string {
  switch (judged.verdict[0]) {
    case "unusable":
      return `Not a valid spectrum: ${judged.unusable ?? "no reason recorded"}.`;
    case "unfamiliar":
      return unfamiliarWords(explained);
    case "extrapolated":
      return extrapolatedWords(explained);
    case "sparse":
      return sparseWords;
    default:
      return "Like the calibration samples: the model has seen spectra of this kind, in these amounts.";
  }
}

export const nothingExplained: Explained = { qRegions: [], t2Regions: [], slopes: false };
