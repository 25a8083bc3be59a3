import { tQuantile } from "../limits/index.ts";
import type { Finding, Stretch } from "../messages/index.ts";
import { biasTest } from "./bias-test.ts";
import { lineThrough } from "./line.ts";
import { oddPair } from "./odd-pair.ts";
import { stageOf } from "./stage.ts";
import { agreementStatistics, type Promised, sepTest } from "./statistics.ts";
import { errorsOf, type Run, runsOf } from "./stretches.ts";

/** A pair that counts. */
export interface CountedPair {
  /** when the sample was drawn, epoch ms */
  time: number;
  predicted: number;
  laboratory: number;
}

/** What is compared. */
export interface Compared {
  property: string;
  unit: string;
  /** calibrated range */
  range: readonly [number, number];
  /** undefined when the model does not say its RMSECV */
  promised: Promised | undefined;
}

/** The level of a stretch is called a bias below this p: stricter than 5 %, because the stretches were looked for. */
const biasedBelow = 0.01;
const leastForBias = 4;
/** of the tests of scatter and slope, for which nothing was looked for */
const significant = 0.05;

/** How predictions and laboratory agree, stretch by stretch. `pairs`: of one property and one model, in order of sample time. Pure. */
export function findingOf(pairs: readonly CountedPair[], { property, unit, range, promised }: Compared): Finding {
  const errors = pairs.map(({ predicted, laboratory }) => predicted - laboratory);
  const runs = runsOf(errors);
  const scatter = pooledScatter(runs, errors);
  return {
    property,
    unit,
    stage: stageOf(
      pairs.map(({ laboratory }) => laboratory),
      range,
    ),
    stretches: runs.map((run) => stretchOf(run, pairs, errors)),
    scatter: scatter?.value ?? null,
    rmsecv: promised?.rmsecv ?? null,
    scatterGrown: scatter && promised ? sepTest(scatter.value, scatter.freedom + 1, promised).p < significant : null,
    slopeOff: slopeOff(pairs, runs),
    odd: oddPair(levelled(runs, errors)) ? 1 : 0,
  };
}

function stretchOf(run: Run, pairs: readonly CountedPair[], errors: readonly number[]): Stretch {
  const ours = errorsOf(run, errors);
  const { n, bias, sep, p } = ours.length > 1 ? biasTest(ours) : { n: 1, bias: ours[0], sep: 0, p: 1 };
  const half = n > 1 ? (tQuantile(0.975, n - 1) * sep) / Math.sqrt(n) : null;
  return {
    from: pairs[run.first].time,
    to: pairs[run.last].time,
    n,
    bias: { value: bias, low: half === null ? null : bias - half, high: half === null ? null : bias + half },
    p,
    biased: n >= leastForBias && p < biasedBelow,
  };
}

/** √(ΣΣ(e − level)²/(n − runs)): a bias that came and went is no scatter. */
function pooledScatter(
  runs: readonly Run[],
  errors: readonly number[],
): { value: number; freedom: number } | undefined {
  const freedom = errors.length - runs.length;
  if (freedom < 2) return undefined;
  const sum = levelled(runs, errors).reduce((total, e) => total + e * e, 0);
  return { value: Math.sqrt(sum / freedom), freedom };
}

/** Every error without the level of its run. */
export function levelled(runs: readonly Run[], errors: readonly number[]): number[] {
  return runs.flatMap((run) => {
    const ours = errorsOf(run, errors);
    const level = ours.reduce((sum, e) => sum + e, 0) / ours.length;
    return ours.map((e) => e - level);
  });
}

/** Over the present stretch: a bias that came and went would tilt the line of all pairs. */
function slopeOff(pairs: readonly CountedPair[], runs: readonly Run[]): boolean {
  const run = runs.at(-1);
  const ours = run ? pairs.slice(run.first, run.last + 1) : [];
  const predicted = ours.map((pair) => pair.predicted);
  const laboratory = ours.map((pair) => pair.laboratory);
  if (ours.length < 10 || !lineThrough(predicted, laboratory)) return false;
  const { slopeTest } = agreementStatistics(predicted, laboratory, undefined);
  return slopeTest !== null && slopeTest.p < significant;
}
