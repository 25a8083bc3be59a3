import type { Composition, Ingredient } from "./ingredients.ts";

export const streamIds = ["bq-201", "bq-305", "bq-410"] as const;
export type PlantStreamId = (typeof streamIds)[number];

/** How much one ingredient varies by itself; mass fractions. */
export interface FreeIngredient {
  ingredient: Ingredient;
  /** normal running: middle ± swing, never further */
  middle: number;
  swing: number;
  /** what the calibration samples span; wider than normal running and than every grade */
  calibrated: readonly [low: number, high: number];
}

export interface LaboratoryProperty {
  /** as the calibration table heads it; the unit is wt% */
  name: Ingredient;
  unit: "wt%";
  /** standard deviation of one laboratory result: absolute (wt%) and relative parts, added in squares */
  error: { absolute: number; relative: number };
}

/** One measuring point: an analyzer channel looking at one line of the plant. */
export interface StreamPlan {
  id: PlantStreamId;
  name: string;
  /** optical path of the probe, mm */
  pathMm: number;
  free: readonly FreeIngredient[];
  /** what makes up the rest */
  balance: Ingredient;
  properties: readonly LaboratoryProperty[];
  temperature: { middleC: number; swingK: number; calibratedK: number };
  /** standard deviation of the noise of one channel, absorbance */
  noise: number;
  calibrationSamples: number;
  /** preprocessing that suits this chemistry, in the words of `calibrate --steps` */
  steps: string;
  grades: { usual: string; other: string; shift: Partial<Composition> };
  /** what size 1 of each disturbance is on this line */
  sizes: {
    /** mass fraction of acetone */
    coSolvent: number;
    /** change of mass fractions that leads out of the calibrated range */
    feed: Partial<Composition>;
    /** absorbance of the film in its strongest band */
    film: number;
    /** kelvin above the usual */
    heatK: number;
    /** growth of the lamp's fault, absorbance between the ends of the axis */
    lamp: number;
  };
}

export const streamPlans: Record<PlantStreamId, StreamPlan> = {
  "bq-201": {
    id: "bq-201",
    name: "Column overhead",
    pathMm: 1,
    free: [
      { ingredient: "water", middle: 0.072, swing: 0.014, calibrated: [0.02, 0.14] },
      { ingredient: "propanol", middle: 0.014, swing: 0.005, calibrated: [0, 0.03] },
    ],
    balance: "ethanol",
    properties: [
      { name: "ethanol", unit: "wt%", error: { absolute: 0.12, relative: 0 } },
      { name: "water", unit: "wt%", error: { absolute: 0.03, relative: 0.008 } },
    ],
    temperature: { middleC: 38, swingK: 2, calibratedK: 6 },
    noise: 1.2e-4,
    calibrationSamples: 90,
    steps: "snv; savitzky-golay 15 2 1; center",
    grades: { usual: "industrial", other: "fine", shift: { water: -0.024, propanol: -0.004 } },
    sizes: { coSolvent: 0.03, feed: { water: 0.17 }, film: 0.05, heatK: 22, lamp: 0.035 },
  },
  "bq-305": {
    id: "bq-305",
    name: "Recycled blend",
    pathMm: 1,
    free: [
      { ingredient: "ethanol", middle: 0.3, swing: 0.035, calibrated: [0.18, 0.42] },
      { ingredient: "water", middle: 0.036, swing: 0.009, calibrated: [0.005, 0.075] },
    ],
    balance: "ethyl acetate",
    properties: [
      { name: "ethyl acetate", unit: "wt%", error: { absolute: 0.25, relative: 0 } },
      { name: "ethanol", unit: "wt%", error: { absolute: 0.2, relative: 0 } },
      { name: "water", unit: "wt%", error: { absolute: 0.02, relative: 0.01 } },
    ],
    temperature: { middleC: 32, swingK: 2, calibratedK: 6 },
    noise: 1.2e-4,
    calibrationSamples: 90,
    steps: "snv; savitzky-golay 15 2 1; center",
    grades: { usual: "blend 30", other: "blend 38", shift: { ethanol: 0.07, water: 0.004 } },
    sizes: { coSolvent: 0.045, feed: { water: 0.11, ethanol: 0.1 }, film: 0.05, heatK: 22, lamp: 0.035 },
  },
  "bq-410": {
    id: "bq-410",
    name: "Dryer outlet",
    pathMm: 2,
    free: [
      { ingredient: "water", middle: 0.0022, swing: 0.0008, calibrated: [0.0002, 0.006] },
      { ingredient: "ethanol", middle: 0.03, swing: 0.007, calibrated: [0.005, 0.06] },
    ],
    balance: "ethyl acetate",
    properties: [{ name: "water", unit: "wt%", error: { absolute: 0.003, relative: 0.015 } }],
    temperature: { middleC: 45, swingK: 2, calibratedK: 6 },
    noise: 1.2e-4,
    calibrationSamples: 70,
    steps: "snv; savitzky-golay 15 2 1; center",
    grades: { usual: "dry", other: "extra dry", shift: { water: -0.0009 } },
    sizes: { coSolvent: 0.02, feed: { water: 0.01 }, film: 0.05, heatK: 22, lamp: 0.035 },
  },
};
