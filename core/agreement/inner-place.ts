import { tQuantile, tTails } from "../limits/index.ts";
import type { InnerPlace } from "../messages/index.ts";
import type { Model } from "../model/index.ts";
import { quadraticTerm } from "../pls/index.ts";
import { biasTest } from "./bias-test.ts";

/** A pair with the scores of its reading. */
export interface PlacedPair {
  /** of the pair in the list that it came from */
  index: number;
  t: readonly number[];
  laboratory: number;
}

/** Tests of a single pair and of all of them: 1 %, two-sided. */
const alpha = 0.01;
/** Below this neither shift nor bend is judged. */
const leastPairs = 6;

/**
 * u of each component, one property by itself and in the unit of t: what the components before leave of y, divided by the component's
 * loading.
 *
 *     u_a = ((y − mean)/deviation − Σ_(b<a) t_b q_b)/q_a
 *
 * For a model of one property this is the U of NIPALS. Source: Geladi & Kowalski, Anal. Chim. Acta 185 (1986) 1. Checked against the
 * Y scores and held-out predictions of R's pls: test/reference/inner-place.test.ts.
 *
 * @param t A scores
 * @returns A values; NaN for a component that carries nothing of the property
 */
export function yScoresOf(y: number, t: readonly number[], model: Model, property: number): number[] {
  const { mean, deviation } = model.properties[property];
  let left = (y - mean) / deviation;
  return (model.yLoadings ?? []).map((q, a) => {
    const u = q[property] === 0 ? Number.NaN : left / q[property];
    left -= t[a] * q[property];
    return u;
  });
}

/**
 * Where pairs lie in the inner relation of the calibration, component by component. There u = t but for what later components and the
 * laboratory's error add, with the standard error of a new sample
 *
 *     s_a √(1 + 1/n + t²/Σt²)     s_a² = Σ(u − t)²/(n − a − 1)
 *
 * A pair further away is odd: its spectrum and its value may be ordinary each, but not together.
 *
 * Shift and bend are judged by what all components together leave, e = (y − mean)/deviation − Σ t q, since what later components add need not
 * vanish where a process runs: shifted when the mean of e is not 0, bent when e goes with t² of the component (a component-plus-residual plot;
 * Larsen & McCleary, Technometrics 14 (1972) 781, from memory), so that the property is not linear in these spectra any more. Empty when the
 * model keeps no scores or reference values.
 */
export function innerPlaces(pairs: readonly PlacedPair[], model: Model, property: number): InnerPlace[] {
  const { scores, yLoadings, samples } = model;
  const { reference } = samples;
  if (!scores || !yLoadings || !reference) return [];
  const u = scores.map((t, i) => yScoresOf(reference[i][property], t, model, property));
  const pairsU = pairs.map(({ laboratory, t }) => yScoresOf(laboratory, t, model, property));
  const left = pairs.map(({ laboratory, t }) => leftOf(laboratory, t, model, property));
  return yLoadings.flatMap((q, a) => {
    if (q[property] === 0) return [];
    const calibration = { t: scores.map((row) => row[a]), u: u.map((row) => row[a]) };
    const placed = {
      index: pairs.map(({ index }) => index),
      t: pairs.map(({ t }) => t[a]),
      u: pairsU.map((row) => row[a]),
    };
    return [placeIn(a + 1, calibration, placed, left)];
  });
}

/** What all components leave of y, in its scaled unit. */
function leftOf(y: number, t: readonly number[], { properties, yLoadings = [] }: Model, property: number): number {
  const { mean, deviation } = properties[property];
  return yLoadings.reduce((left, q, a) => left - t[a] * q[property], (y - mean) / deviation);
}

function placeIn(
  component: number,
  calibration: { t: number[]; u: number[] },
  placed: { index: number[]; t: number[]; u: number[] },
  left: readonly number[],
): InnerPlace {
  const n = calibration.t.length;
  const freedom = n - component - 1;
  const s = Math.sqrt(calibration.t.reduce((sum, t, i) => sum + (calibration.u[i] - t) ** 2, 0) / freedom);
  const tt = calibration.t.reduce((sum, t) => sum + t * t, 0);
  const apart = placed.t.map((t, i) => (placed.u[i] - t) / (s * Math.sqrt(1 + 1 / n + (t * t) / tt)));
  const limit = tQuantile(1 - alpha / 2, freedom);
  const enough = placed.t.length >= leastPairs;
  const shift = enough ? biasTest(left) : null;
  const bend = enough ? bendTest(placed.t, left) : null;
  return {
    component,
    calibration,
    pairs: { ...placed, apart },
    limit,
    odd: placed.index.filter((_, i) => Math.abs(apart[i]) > limit),
    shift: shift && { statistic: shift.statistic, freedom: shift.freedom, p: shift.p },
    shifted: shift !== null && shift.p < alpha,
    bend,
    bent: bend !== null && bend.p < alpha,
  };
}

function bendTest(t: readonly number[], left: readonly number[]): NonNullable<InnerPlace["bend"]> {
  const statistic = quadraticTerm({ t, u: left });
  const freedom = t.length - 3;
  return { statistic, freedom: [freedom], p: tTails(statistic, freedom) };
}
