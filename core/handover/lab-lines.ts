import { type Compared, countedOf, findingInShort, findingOf, writingFor } from "../agreement/index.ts";
import type { LabResult, ShiftLabLine } from "../messages/index.ts";
import { named, type PlantTime } from "../words/index.ts";

/** As the limits of a control chart: within three standard errors of the model a single difference is nothing to act on. */
const errorsApart = 3;

export interface LabFacts {
  /** all results of one property up to the end of the shift, and as far back as the agreement is to be judged */
  results: readonly LabResult[];
  /** what came in within it is told: `from` ≤ time < `to`, epoch ms */
  from: number;
  to: number;
  /** of the model in charge */
  model: string;
  compared: Compared;
}

/**
 * The laboratory's results of one property that came in during a shift, each beside its prediction; and where pair after pair says that the two
 * have parted, that sentence first.
 */
export function labLines({ results, from, to, model, compared }: LabFacts, time: PlantTime): ShiftLabLine[] {
  const known = results.filter(({ receivedAt, withdrawn }) => receivedAt < to && !withdrawn);
  const fresh = known.filter(({ receivedAt }) => receivedAt >= from).sort((a, b) => a.time - b.time);
  if (fresh.length === 0) return [];
  const rmsecv = compared.promised?.rmsecv;
  const write = writingFor(compared.unit, rmsecv ?? null, time, to);
  const { pairs } = countedOf(known, model);
  const finding = pairs.length > 0 ? findingOf(pairs, compared) : undefined;
  const biased = finding?.stretches.at(-1)?.biased === true;
  return fresh.map((result, i): ShiftLabLine => {
    const { stream, property, unit, value, pair } = result;
    const apart = pair.predicted === null ? null : pair.predicted - value;
    const counts = pair.apart === null && apart !== null;
    const far = counts && rmsecv !== undefined && Math.abs(apart) > errorsApart * rmsecv;
    const beside =
      apart === null
        ? "no prediction that may be believed"
        : `predicted ${write.size(pair.predicted!)}, ${write.difference(apart)} apart`;
    const agreement =
      biased && i === fresh.length - 1 ? ` ${named(property)} is ${findingInShort(finding!, write)}.` : "";
    const why = pair.apart === null ? "" : ` ${pair.says}`;
    return {
      ...{ stream, property, unit, at: result.time, laboratory: value, predicted: pair.predicted },
      says: `${named(property)}: laboratory ${write.size(value)}, ${beside}.${why}${agreement}`,
      disagrees: far || agreement !== "",
    };
  });
}
