import { type Conditions, composed, opticsMiddle, opticsSpread } from "./conditions.ts";
import type { Composition } from "./ingredients.ts";
import { normalTable } from "./normal-noise.ts";
import { measured, type Plant } from "./plant.ts";
import { evenNumbers, hash32, keyOf } from "./random.ts";
import type { LaboratoryProperty, PlantStreamId, StreamPlan } from "./streams.ts";

/** One sample that was drawn, measured by the analyzer and sent to the laboratory. */
export interface CalibrationSample {
  sample: string;
  /** epoch ms */
  time: number;
  /** samples of one campaign stay together when a validation leaves groups out */
  group: string;
  /** laboratory results in the order of the plan's properties, wt% */
  results: number[];
  values: Float32Array;
}

export type SetKind = "calibration" | "validation";

/** First campaign: long before any history that is asked for. */
const firstCampaign = Date.UTC(2026, 1, 9, 7, 30);
const perCampaign = 6;
const campaignEveryMs = 3 * 86_400_000;
const sampleEveryMs = 40 * 60_000;

/**
 * The samples behind a model. Calibration: an even spread (Latin hypercube, so that every amount, temperature and baseline is met at every
 * level) over more than normal running. Validation: drawn independently over the inner 80 % of the same ranges.
 */
export function calibrationSet(plant: Plant, stream: PlantStreamId, kind: SetKind): CalibrationSample[] {
  const { plan } = plant.lines[stream];
  const count = kind === "calibration" ? plan.calibrationSamples : Math.round(plan.calibrationSamples / 3);
  const random = evenNumbers(hash32(plant.seed, keyOf(`${stream}/${kind}`), 0));
  const even = () => random() / 0x1_0000_0000;
  const dimensions = plan.free.length + 5;
  const design =
    kind === "calibration" ? latinHypercube(count, dimensions, even) : independent(count, dimensions, even);
  const prefix = kind === "calibration" ? "c" : "v";
  const start = firstCampaign + (kind === "calibration" ? 0 : 60 * 86_400_000);

  return design.map((place, i) => {
    const conditions = conditionsOf(plan, place);
    const campaign = Math.floor(i / perCampaign);
    return {
      sample: `${prefix}${String(i + 1).padStart(3, "0")}`,
      time: start + campaign * campaignEveryMs + (i % perCampaign) * sampleEveryMs,
      group: `${prefix}-campaign-${campaign + 1}`,
      results: laboratoryResults(plan, conditions.composition, random),
      values: measured(plan, conditions, random()),
    };
  });
}

/** Place in the design (each coordinate 0–1) to conditions. */
function conditionsOf(plan: StreamPlan, place: readonly number[]): Conditions {
  const fractions: Partial<Composition> = {};
  plan.free.forEach(({ ingredient, calibrated: [low, high] }, k) => {
    fractions[ingredient] = low + (high - low) * place[k]!;
  });
  const [warm, gain, offset, tilt, bow] = place.slice(plan.free.length).map((p) => 2 * p - 1) as [
    number,
    number,
    number,
    number,
    number,
  ];
  return {
    composition: composed(plan, fractions),
    temperatureC: plan.temperature.middleC + plan.temperature.calibratedK * warm,
    optics: {
      gain: opticsMiddle.gain + opticsSpread.gain * gain,
      offset: opticsMiddle.offset + opticsSpread.offset * offset,
      tilt: opticsMiddle.tilt + opticsSpread.tilt * tilt,
      bow: opticsMiddle.bow + opticsSpread.bow * bow,
    },
    film: 0,
    lamp: 0,
    bubble: 0,
  };
}

function laboratoryResults(plan: StreamPlan, truth: Composition, random: () => number): number[] {
  return plan.properties.map(({ name, error }) => {
    const percent = 100 * truth[name];
    return percent + laboratoryError(error, percent, random());
  });
}

/** What the laboratory's result is off by, wt%; `chance`: 32 even bits. */
export function laboratoryError(error: LaboratoryProperty["error"], percent: number, chance: number): number {
  return Math.hypot(error.absolute, error.relative * percent) * normalTable()[chance >>> 20]!;
}

/** One point in each of `count` even slices of every dimension, the slices shuffled against each other (McKay, Beckman & Conover 1979). */
function latinHypercube(count: number, dimensions: number, even: () => number): number[][] {
  const columns = Array.from({ length: dimensions }, () => {
    const slices = Array.from({ length: count }, (_, i) => (i + even()) / count);
    shuffleInPlace(slices, even);
    return slices;
  });
  return Array.from({ length: count }, (_, i) => columns.map((column) => column[i]!));
}

function independent(count: number, dimensions: number, even: () => number): number[][] {
  return Array.from({ length: count }, () => Array.from({ length: dimensions }, () => 0.1 + 0.8 * even()));
}

/** Fisher–Yates. */
function shuffleInPlace(values: number[], even: () => number): void {
  for (let i = values.length - 1; i > 0; i--) {
    const j = Math.floor(even() * (i + 1));
    [values[i], values[j]] = [values[j]!, values[i]!];
  }
}
