import { type ApartReason, type Judged, type LabPair, type Verdict, verdicts } from "../messages/index.ts";

/** How a result is matched to readings. */
export interface PairingRules {
  /** the sample is drawn this much later (or, negative, earlier) than the probe sees the same material, ms: reading time = sample time − lag */
  lagMs: number;
  /** readings within ± half of it are averaged, ms */
  windowMs: number;
  /** from this time on between two readings there is a gap, ms: nothing is interpolated across one */
  gapMs: number;
  /** the most that the predictions may move within the window, unit of the property: the model's error. undefined: the model does not say it */
  mostMove: number | undefined;
}

export type Pairing<R> =
  | { kind: "pair"; pair: Omit<LabPair, "scores">; used: R[] }
  /** there is nothing to compare with: the result is refused */
  | { kind: "no readings"; says: string };

type AnyReading = { judged: Judged };

/** Where the readings of a sample are looked for, ends included: the window, and as far as a neighbour may stand. Epoch ms. */
export function searchedFor(
  sampleTime: number,
  { lagMs, windowMs, gapMs }: PairingRules,
): { from: number; to: number } {
  const at = sampleTime - lagMs;
  const reach = Math.max(windowMs / 2, gapMs);
  return { from: at - reach, to: at + reach };
}

/**
 * Puts a result beside the predictions of its moment: the mean over the window or, where no reading fell into it, the straight line between
 * the readings before and after, never across a gap. It counts when most of these readings were inside (then only those go into the mean)
 * and the process stood still within the model's error; else it is kept apart, and says why.
 *
 * @param readings of the stream around the moment, in order of time ({@link searchedFor})
 * @param property name and unit
 *
 * Source: practice of ASTM D3764 and D6122: sample time, not result time; lag; mean over the window; no pair while the process moves; only
 * readings that the model supports (from memory).
 */
export function pairOf<R extends AnyReading>(
  sampleTime: number,
  property: { name: string; unit: string },
  readings: readonly R[],
  rules: PairingRules,
): Pairing<R> {
  const at = sampleTime - rules.lagMs;
  const near = readings.filter(({ judged }) => Math.abs(judged.time - at) <= rules.windowMs / 2);
  const found = near.length > 0 ? near : neighbours(at, readings, rules.gapMs);
  if (found.length === 0) return { kind: "no readings", says: noReadings(at, readings) };
  const interpolated = near.length === 0;
  const inside = found.filter(({ judged }) => judged.verdict[0] === "inside");
  const counted = interpolated ? inside.length === found.length : inside.length * 2 > found.length;
  const used = counted ? inside : found;
  const points = pointsOf(used, property.name);
  const moved = movedBy(points);
  const still = rules.mostMove === undefined || moved <= rules.mostMove;
  const apart = !counted ? "not inside" : still ? null : "process moved";
  const verdict = worst(found);
  const common = { judged: used[0].judged, verdict, readings: found.length, inside: inside.length };
  return {
    kind: "pair",
    used: [...used],
    pair: {
      predicted: points.length === 0 ? null : interpolated ? between(at, points) : meanOf(points),
      from: used[0].judged.time,
      to: used.at(-1)!.judged.time,
      readings: used.length,
      interpolated,
      verdict,
      apart,
      says: sayWhy(apart, { ...common, moved, unit: property.unit, mostMove: rules.mostMove }),
      model: used[0].judged.model,
      limitSet: used[0].judged.limitSet,
    },
  };
}

interface Point {
  time: number;
  value: number;
}

function pointsOf(used: readonly AnyReading[], name: string): Point[] {
  return used.flatMap(({ judged }) => {
    const value = judged.properties[name]?.value ?? null;
    return value === null ? [] : [{ time: judged.time, value }];
  });
}

/** The last reading before and the first after, when there is no gap between them. */
function neighbours<R extends AnyReading>(at: number, readings: readonly R[], gapMs: number): R[] {
  const before = readings.findLast(({ judged }) => judged.time <= at);
  const after = readings.find(({ judged }) => judged.time > at);
  return before && after && after.judged.time - before.judged.time <= gapMs ? [before, after] : [];
}

function between(at: number, [first, last = first]: readonly Point[]): number {
  const share = last.time > first.time ? (at - first.time) / (last.time - first.time) : 0;
  return first.value + share * (last.value - first.value);
}

function meanOf(points: readonly Point[]): number {
  return points.reduce((sum, { value }) => sum + value, 0) / points.length;
}

function movedBy(points: readonly Point[]): number {
  const values = points.map(({ value }) => value);
  return values.length > 0 ? Math.max(...values) - Math.min(...values) : 0;
}

function worst(found: readonly AnyReading[]): Verdict {
  return verdicts.find((word) => found.some(({ judged }) => judged.verdict[0] === word)) ?? "unusable";
}

function noReadings(at: number, readings: readonly AnyReading[]): string {
  const nearest = readings.reduce<number | undefined>(
    (best, { judged }) => (best === undefined || Math.abs(judged.time - at) < Math.abs(best - at) ? judged.time : best),
    undefined,
  );
  const stamp = new Date(at).toISOString();
  const where =
    nearest === undefined ? "none near it" : `the nearest at ${new Date(nearest).toISOString()}, beyond a gap`;
  return `no reading at ${stamp} (${where}). Check the time at which the sample was drawn.`;
}

function sayWhy(
  apart: ApartReason | null,
  seen: {
    verdict: Verdict;
    readings: number;
    inside: number;
    moved: number;
    unit: string;
    mostMove: number | undefined;
  },
): string {
  switch (apart) {
    case "not inside":
      return `Kept apart: ${seen.readings - seen.inside} of ${seen.readings} readings ${seen.verdict}. The model does not support its number there, so the pair says nothing of how well it agrees.`;
    case "process moved":
      return `Kept apart: the predictions moved by ${seen.moved.toPrecision(2)} ${seen.unit} within the window, more than the model's error (${seen.mostMove?.toPrecision(2)} ${seen.unit}). Draw samples while the process stands still.`;
    default:
      return seen.inside < seen.readings
        ? `${seen.readings - seen.inside} of ${seen.readings} readings were not inside and are left out of the mean.`
        : "";
  }
}
