import { comparedOf } from "../../core/agreement/index.ts";
import { labLines } from "../../core/handover/index.ts";
import type { ShiftLabLine } from "../../core/messages/index.ts";
import type { PlantTime } from "../../core/words/index.ts";
import type { ReadingExplainer } from "../gateway/reading-view.ts";
import type { StoreReader } from "../store/store.ts";

/** Two months of daily samples are enough to tell a bias and to date it. */
const lookBackMs = 60 * 24 * 3_600_000;

/** What the laboratory said of a stream during a shift, property by property. */
export function laboratoryOf(
  store: StoreReader,
  explainer: ReadingExplainer,
  stream: string,
  { from, to, time }: { from: number; to: number; time: PlantTime },
): ShiftLabLine[] {
  const inCharge = store.limitSet(stream)?.model;
  const results = store.labResults({ stream, from: from - lookBackMs, to });
  if (!inCharge || results.length === 0) return [];
  const { model } = explainer.model(inCharge);
  return model.properties.flatMap(({ name }, i) => {
    const own = results.filter(({ property }) => property === name);
    return labLines({ results: own, from, to, model: inCharge, compared: comparedOf(model, i) }, time);
  });
}
