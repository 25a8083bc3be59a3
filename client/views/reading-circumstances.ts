import type { Plant, PlantStream, ReadingView } from "../../core/messages/index.ts";
import type { PlantTime } from "../words/plant-time.ts";
import { decimalsFor, fixed, withUncertainty } from "../words/quantity.ts";
import { evidence } from "../words/verdict-words.ts";

/** What a picture of a reading must say of itself once it has left the screen: whose, when, by which clock, how far to be believed. */
export function readingCircumstances(
  { properties }: PlantStream,
  { judged, explanation, model }: ReadingView,
  { plant, time, now }: { plant: Plant; time: PlantTime; now: number },
): string[] {
  const [worst] = judged.verdict;
  const terms = evidence(judged);
  const inside = worst === "inside";
  const numbers = properties.flatMap(({ name, unit, scale: [low, high] }) => {
    const { value, uncertainty } = judged.properties[name] ?? { value: null, uncertainty: null };
    if (value === null) return [];
    const words =
      inside && uncertainty !== null
        ? withUncertainty(value, uncertainty)
        : fixed(value, decimalsFor((high - low) / 100));
    return [`${name} ${words} ${unit}`];
  });
  const predicted = inside ? "Predicted" : "Predicted, not to be believed";
  return [
    `${plant.name}${plant.demo ? " (invented plant: nothing here is measured)" : ""}. Reading of ${time.full(judged.time)}, ${time.zone}.`,
    `${worst}${terms ? ` (${terms})` : ""}. ${explanation?.says ?? judged.unusable ?? ""}`,
    ...(numbers.length > 0 ? [`${predicted}: ${numbers.join(", ")}.`] : []),
    `${model ? `Model ${model.name}, ${model.components} components. ` : ""}Limit set ${judged.limitSet}. Drawn ${time.full(now)}.`,
    plant.caution,
  ];
}
