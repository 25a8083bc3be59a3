import type { Band } from "./band.ts";

export const ingredientNames = ["ethanol", "water", "ethyl acetate", "propanol", "acetone"] as const;
export type Ingredient = (typeof ingredientNames)[number];

/** Mass fractions; they add up to 1. */
export type Composition = Record<Ingredient, number>;

/** What each liquid absorbs. Invented: the places are those of the groups in it, heights and widths are ours. */
export const ingredientBands: Record<Ingredient, readonly Band[]> = {
  ethanol: [
    { centreNm: 1192, widthNm: 18, height: 0.035, growthPerK: -0.0008 },
    { centreNm: 1412, widthNm: 14, height: 0.06, shiftNmPerK: -0.08, growthPerK: 0.003 },
    { centreNm: 1578, widthNm: 62, height: 0.28, shiftNmPerK: -0.16, growthPerK: -0.0015 },
    { centreNm: 1694, widthNm: 14, height: 0.3, growthPerK: -0.0008 },
    { centreNm: 1734, widthNm: 19, height: 0.25, growthPerK: -0.0008 },
    { centreNm: 2076, widthNm: 48, height: 0.85, shiftNmPerK: -0.13, growthPerK: -0.001 },
  ],
  water: [
    { centreNm: 1164, widthNm: 26, height: 0.08, shiftNmPerK: -0.1 },
    { centreNm: 1450, widthNm: 38, height: 0.8, shiftNmPerK: -0.1, growthPerK: 0.0005 },
    { centreNm: 1786, widthNm: 40, height: 0.12 },
    { centreNm: 1936, widthNm: 32, height: 2.6, shiftNmPerK: -0.11, growthPerK: 0.0005 },
  ],
  "ethyl acetate": [
    { centreNm: 1182, widthNm: 15, height: 0.028, growthPerK: -0.0008 },
    { centreNm: 1372, widthNm: 17, height: 0.03 },
    { centreNm: 1672, widthNm: 13, height: 0.19, growthPerK: -0.0008 },
    { centreNm: 1716, widthNm: 17, height: 0.26, growthPerK: -0.0008 },
    { centreNm: 1912, widthNm: 20, height: 0.1, growthPerK: -0.0004 },
    { centreNm: 2138, widthNm: 24, height: 0.5, growthPerK: -0.0008 },
  ],
  propanol: [
    { centreNm: 1200, widthNm: 20, height: 0.042 },
    { centreNm: 1416, widthNm: 15, height: 0.05 },
    { centreNm: 1590, widthNm: 60, height: 0.22, shiftNmPerK: -0.15 },
    { centreNm: 1704, widthNm: 14, height: 0.33 },
    { centreNm: 1760, widthNm: 18, height: 0.22 },
    { centreNm: 2092, widthNm: 46, height: 0.66, shiftNmPerK: -0.12 },
  ],
  acetone: [
    { centreNm: 1166, widthNm: 14, height: 0.03 },
    { centreNm: 1688, widthNm: 12, height: 0.22 },
    { centreNm: 1766, widthNm: 14, height: 0.16 },
    { centreNm: 1864, widthNm: 16, height: 0.24 },
    { centreNm: 2108, widthNm: 17, height: 0.44 },
  ],
};

/** What settles on a probe's window: a resin. Height 1 in its strongest band, so that a film is told by its absorbance there. */
export const filmBands: readonly Band[] = [
  { centreNm: 1240, widthNm: 90, height: 0.35 },
  { centreNm: 1512, widthNm: 42, height: 0.75 },
  { centreNm: 1820, widthNm: 48, height: 0.5 },
  { centreNm: 2050, widthNm: 42, height: 1 },
];
