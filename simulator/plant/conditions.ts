import type { Disturbance } from "./disturbance.ts";
import type { Composition } from "./ingredients.ts";
import { type Ingredient, ingredientNames } from "./ingredients.ts";
import type { StreamPlan } from "./streams.ts";

/** How light reaches the detector, apart from what the liquid absorbs. */
export interface Optics {
  /** path relative to the nominal one: scatter lengthens or shortens it */
  gain: number;
  /** baseline, absorbance: constant, tilt between the ends of the axis (±), bow */
  offset: number;
  tilt: number;
  bow: number;
}

/** Everything that a spectrum depends on, but its noise. */
export interface Conditions {
  composition: Composition;
  /** liquid, °C */
  temperatureC: number;
  optics: Optics;
  /** absorbance of the film in its strongest band */
  film: number;
  /** wear of the lamp, absorbance */
  lamp: number;
  /** share of the beam through a bubble */
  bubble: number;
}

/** Standard size of the calibration's spread in optics; normal running stays within about half of it. */
export const opticsSpread = { gain: 0.03, offset: 0.02, tilt: 0.012, bow: 0.004 };
export const opticsMiddle: Optics = { gain: 1, offset: 0.08, tilt: 0.02, bow: 0 };

/** A composition from its free ingredients; the balance takes the rest. Amounts below nothing become nothing. */
export function composed(plan: StreamPlan, free: Partial<Composition>): Composition {
  const composition = Object.fromEntries(ingredientNames.map((name) => [name, 0])) as Composition;
  let rest = 1;
  for (const [name, fraction] of Object.entries(free) as [Ingredient, number][]) {
    composition[name] = Math.max(0, fraction);
    rest -= composition[name];
  }
  composition[plan.balance] = rest;
  return composition;
}

/** The conditions that a disturbance makes of undisturbed ones; `conditions` is not changed. */
export function disturbed(plan: StreamPlan, conditions: Conditions, disturbance: Disturbance): Conditions {
  const { sizes, grades } = plan;
  const free: Partial<Composition> = {};
  for (const { ingredient } of plan.free) {
    const graded = conditions.composition[ingredient] + disturbance.grade * (grades.shift[ingredient] ?? 0);
    const away = sizes.feed[ingredient] ?? graded;
    free[ingredient] = graded + disturbance.feed * (away - graded);
  }
  let composition = composed(plan, free);
  composition = diluted(composition, "acetone", disturbance.coSolvent * sizes.coSolvent);
  composition = diluted(composition, "propanol", disturbance.wash);
  return {
    composition,
    temperatureC: conditions.temperatureC + disturbance.heat * sizes.heatK,
    optics: conditions.optics,
    film: conditions.film + disturbance.film * sizes.film,
    lamp: conditions.lamp + disturbance.lamp * sizes.lamp,
    bubble: Math.min(1, conditions.bubble + disturbance.bubble),
  };
}

/** What comes of it when a fraction of the mass is replaced by one ingredient. */
function diluted(composition: Composition, by: Ingredient, fraction: number): Composition {
  if (fraction === 0) return composition;
  const left = 1 - fraction;
  const mixed = Object.fromEntries(ingredientNames.map((name) => [name, composition[name] * left])) as Composition;
  mixed[by] += fraction;
  return mixed;
}
