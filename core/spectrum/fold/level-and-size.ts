import type { Fitted } from "../step.ts";
import { regressor } from "../steps/msc.ts";
import { squaresAbout, sum } from "./sums.ts";
import type { Walk } from "./walk.ts";

// What snv, msc, offset and normalise find of a spectrum (x − α) β: a new α and β, without touching a value.

/** SNV of (x − α) β is SNV of x, up to the sign of β. */
export const standardise: Walk = (state) => {
  const { x } = state;
  const p = x.length;
  const mean = sum(x) / p;
  const deviation = Math.sqrt(squaresAbout(x, mean) / (p - 1));
  state.beta = (state.beta < 0 ? -1 : 1) / deviation;
  state.alpha = mean;
};

export function scatter({ reference }: Fitted<"msc">): Walk {
  const { centred, mean, squares } = regressor(reference);
  return (state) => {
    const { x } = state;
    let product = 0;
    for (let j = 0; j < x.length; j++) product += x[j] * centred[j];
    const slope = product / squares;
    state.alpha = sum(x) / x.length - slope * mean;
    state.beta = 1 / slope;
  };
}

export function levelOver(quiet: Int32Array): Walk {
  return (state) => {
    let level = 0;
    for (let k = 0; k < quiet.length; k++) level += state.x[quiet[k]];
    state.alpha = level / quiet.length;
  };
}

export const levelAtLeast: Walk = (state) => {
  const { x, beta } = state;
  let least = x[0];
  for (let j = 1; j < x.length; j++) if (!(x[j] * beta >= least * beta)) least = x[j];
  state.alpha = least;
};

export const shrinkToArea: Walk = (state) => {
  const { x, alpha } = state;
  let area = 0;
  for (let j = 0; j < x.length; j++) area += Math.abs(x[j] - alpha);
  state.beta = (state.beta < 0 ? -1 : 1) / area;
};

export const shrinkToLength: Walk = (state) => {
  state.beta = (state.beta < 0 ? -1 : 1) / Math.sqrt(squaresAbout(state.x, state.alpha));
};
