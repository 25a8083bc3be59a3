import { decimalsFor, fixed, type PlantTime, withUnit } from "../words/index.ts";
import type { Writing } from "./finding-words.ts";

/**
 * How findings of one property are written at a plant: in digits that its error leaves (one more than a value would have, as a bias is a mean),
 * and in the plant's time.
 *
 * @param error RMSECV or scatter, unit of the property; null where neither is known
 */
export function writingFor(unit: string, error: number | null, time: PlantTime, now: number): Writing {
  const decimals = decimalsFor(error) + 1;
  return {
    difference: (value) => withUnit(`${value > 0 ? "+" : ""}${fixed(value, decimals)}`, unit),
    size: (value) => withUnit(fixed(value, decimals), unit),
    moment: (at) => time.brief(at, now),
  };
}
