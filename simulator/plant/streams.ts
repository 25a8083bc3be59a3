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
    /** mass fractions that it goes to, out of the calibrated range */
    feed: Partial<Composition>;
    /** absorbance of the film in its strongest band */
    film: number;
    /** kelvin above the usual */
    heatK: number;
    /** growth of the lamp's fault, absorbance between the ends of the axis */
    lamp: number;
    /** what an aged reagent takes from (or adds to) the laboratory's results of one property, wt% */
    reagent: { property: Ingredient; bias: number };
  };
}

export const streamPlans: Record<PlantStreamId, StreamPlan> = {
  "bq-201": {
    id: "bq-201",
    name: "Column overhead",
    pathMm: 1,
    free: [
      { ingredient: "water", middle: 0.074, swing: 0.034, calibrated: [0.03, 0.12] },
      { ingredient: "propanol", middle: 0.014, swing: 0.011, calibrated: [0, 0.028] },
    ],
    balance: "ethanol",
    properties: [
      { name: "ethanol", unit: "wt%", error: { absolute: 0.12, relative: 0 } },
      { name: "water", unit: "wt%", error: { absolute: 0.03, relative: 0.008 } },
    ],
    temperature: { middleC: 38, swingK: 2.4, calibratedK: 4 },
    noise: 4e-4,
    calibrationSamples: 90,
    steps: "savitzky-golay 15 2 1; center",
    grades: { usual: "industrial", other: "fine", shift: { water: -0.012, propanol: -0.002 } },
    sizes: {
      coSolvent: 0.025,
      feed: { water: 0.235 },
      film: 0.01,
      heatK: 22,
      lamp: 0.016,
      reagent: { property: "water", bias: -0.22 },
    },
  },
  "bq-305": {
    id: "bq-305",
    name: "Recycled blend",
    pathMm: 1,
    free: [
      { ingredient: "ethanol", middle: 0.3, swing: 0.07, calibrated: [0.22, 0.4] },
      { ingredient: "water", middle: 0.036, swing: 0.019, calibrated: [0.01, 0.065] },
    ],
    balance: "ethyl acetate",
    properties: [
      { name: "ethyl acetate", unit: "wt%", error: { absolute: 0.18, relative: 0 } },
      { name: "ethanol", unit: "wt%", error: { absolute: 0.15, relative: 0 } },
      { name: "water", unit: "wt%", error: { absolute: 0.02, relative: 0.01 } },
    ],
    temperature: { middleC: 32, swingK: 2.4, calibratedK: 4 },
    noise: 6e-4,
    calibrationSamples: 90,
    steps: "savitzky-golay 15 2 1; center",
    grades: { usual: "blend 30", other: "blend 34", shift: { ethanol: 0.035, water: 0.003 } },
    sizes: {
      coSolvent: 0.035,
      feed: { water: 0.095, ethanol: 0.46 },
      film: 0.018,
      heatK: 22,
      lamp: 0.028,
      reagent: { property: "water", bias: -0.14 },
    },
  },
  "bq-410": {
    id: "bq-410",
    name: "Dryer outlet",
    pathMm: 2,
    free: [
      { ingredient: "water", middle: 0.0022, swing: 0.0015, calibrated: [0.0002, 0.005] },
      { ingredient: "ethanol", middle: 0.03, swing: 0.017, calibrated: [0.008, 0.052] },
    ],
    balance: "ethyl acetate",
    properties: [{ name: "water", unit: "wt%", error: { absolute: 0.003, relative: 0.015 } }],
    temperature: { middleC: 45, swingK: 2.4, calibratedK: 4 },
    noise: 4e-4,
    calibrationSamples: 70,
    steps: "snv; savitzky-golay 15 2 1; center",
    grades: { usual: "dry", other: "extra dry", shift: { water: -0.0006 } },
    sizes: {
      coSolvent: 0.02,
      feed: { water: 0.0105 },
      film: 0.01,
      heatK: 22,
      lamp: 0.016,
      reagent: { property: "water", bias: -0.018 },
    },
  },
};
