import { along, channelCount, wavelengths } from "./axis.ts";
import { bandSlope, bandSpectrum } from "./band.ts";
import type { Conditions } from "./conditions.ts";
import { filmBands, ingredientBands, ingredientNames } from "./ingredients.ts";
import type { StreamPlan } from "./streams.ts";

const pure = ingredientNames.map((name) => bandSpectrum(ingredientBands[name]));
const warming = ingredientNames.map((name) => bandSlope(ingredientBands[name]));
const film = (() => {
  const bands = bandSpectrum(filmBands);
  const highest = Math.max(...bands);
  return bands.map((value) => value / highest);
})();
/** A cooler lamp loses more of its short waves, and its glass takes on bands of its own: not a straight line, so no baseline step removes it. */
const lampWear = wavelengths.map(
  (nm, j) => 0.5 * along[j]! ** 2 - 0.5 * along[j]! + 0.45 * Math.exp(-0.5 * ((nm - 1390) / 36) ** 2),
);

/**
 * The spectrum that the analyzer would see without noise, by the law of Beer and Lambert.
 *
 *     A_j = gain · L · Σᵢ wᵢ (εᵢⱼ + ΔT · dεᵢⱼ/dT) + offset + tilt · u_j + bow · u_j² + film_j + lamp_j
 *
 * with mass fractions w, path L in mm, ε for mass fraction 1 over 1 mm, u from −1 to 1 along the axis. A bubble lets the share b of the beam
 * pass by the liquid: A' = −log₁₀((1 − b) 10^−A + b · 10^−0.05), which no linear step undoes.
 *
 * @param out 301 values, absorbance; overwritten
 */
export function absorbanceInto(out: Float64Array, plan: StreamPlan, conditions: Conditions): void {
  const { composition, optics } = conditions;
  const warmer = conditions.temperatureC - plan.temperature.middleC;
  out.fill(0);
  for (let i = 0; i < ingredientNames.length; i++) {
    const amount = composition[ingredientNames[i]!] * plan.pathMm * optics.gain;
    if (amount === 0) continue;
    const e = pure[i]!;
    const d = warming[i]!;
    for (let j = 0; j < channelCount; j++) out[j]! += amount * (e[j]! + warmer * d[j]!);
  }
  for (let j = 0; j < channelCount; j++) {
    const u = along[j]!;
    out[j]! += optics.offset + optics.tilt * u + optics.bow * u * u;
  }
  if (conditions.film !== 0) for (let j = 0; j < channelCount; j++) out[j]! += conditions.film * film[j]!;
  if (conditions.lamp !== 0) for (let j = 0; j < channelCount; j++) out[j]! += conditions.lamp * lampWear[j]!;
  if (conditions.bubble !== 0) throughBubbleInPlace(out, conditions.bubble);
}

/** What the gas lets through: 10^−0.05 of the light, the rest is lost at its faces. */
const bubbleLoss = 10 ** -0.05;

function throughBubbleInPlace(values: Float64Array, share: number): void {
  for (let j = 0; j < values.length; j++) {
    values[j] = -Math.log10((1 - share) * 10 ** -values[j]! + share * bubbleLoss);
  }
}
