import type { LabMessage } from "../messages/index.ts";

/** What of a property a laboratory's result is checked against. */
export interface CheckedProperty {
  name: string;
  unit: string;
  /** calibrated */
  range: readonly [number, number];
}

/** Why a result cannot be taken, in words; undefined when it can. `plausible`: of the property, where the plant says it. */
export function whyNotTaken(
  { property, value, unit }: Pick<LabMessage, "property" | "value" | "unit">,
  properties: readonly CheckedProperty[],
  plausible: Readonly<Record<string, readonly [number, number]>> = {},
): string | undefined {
  const known = properties.find(({ name }) => name === property);
  if (!known) {
    const names = properties.map(({ name }) => `"${name}"`).join(", ");
    return `property is "${property}", expected ${names ? `one of ${names}, which the stream's model predicts` : "one that the stream's model predicts, but it has no model"}.`;
  }
  if (unit !== known.unit) {
    const got = unit === "" ? "missing" : `"${unit}"`;
    return `unit of ${property} is ${got}, expected "${known.unit}". Nothing is converted: give the value in that unit.`;
  }
  const [low, high] = plausible[property] ?? plausibleRange(known.range);
  if (value >= low && value <= high) return undefined;
  return `${property} is ${value} ${unit}, expected ${rounded(low)} to ${rounded(high)} ${unit} (calibrated: ${rounded(known.range[0])} to ${rounded(known.range[1])} ${unit}). Check the decimal point and the sample; a wider range is set in the plant's configuration (lab.plausible).`;
}

/** The calibrated range and as much again on either side. Engineering judgement: it is to catch a slipped decimal point, not a bad day. */
export function plausibleRange([low, high]: readonly [number, number]): [number, number] {
  const width = high - low;
  return [low - width, high + width];
}

function rounded(value: number): number {
  return Number(value.toPrecision(4));
}
