import type { AxisSpec } from "../messages/index.ts";
import { type CompiledModel, type Explanation, explain, newScore, type Score, scoreInto } from "../pls/index.ts";
import { axisFromSpec, resampler, sameAxis } from "../spectrum/index.ts";
import { Contributions } from "./contributions.ts";
import type { Explained } from "./words.ts";

/** What the words about a reading are made of. */
export function explainedOf({ qRegions, t2Regions }: Explanation, compiled: CompiledModel): Explained {
  return { qRegions, t2Regions, slopes: takesSlopes(compiled) };
}

function takesSlopes({ model }: CompiledModel): boolean {
  return model.steps.some((step) => step.step === "savitzky-golay" && step.derivative > 0);
}

type Bring = (values: Float64Array, out: Float64Array) => void;

/** How many foreign axes of one stream are kept ready; an analyzer has one, a changed one has two. */
const mostAxes = 16;

/**
 * A compiled model with the room it works in: brings a spectrum to the model's axis and scores it, allocating nothing per reading.
 * One for each stream; not to be shared between threads.
 */
export class Scorer {
  readonly compiled: CompiledModel;
  readonly score: Score;
  /** the last spectrum on the model's axis */
  readonly onAxis: Float64Array;
  #contributions: Contributions | undefined;
  readonly #ways = new Map<string, { bring: Bring | undefined; points: number }>();

  constructor(compiled: CompiledModel) {
    this.compiled = compiled;
    this.score = newScore(compiled);
    this.onAxis = new Float64Array(compiled.channels);
  }

  /** How many values a spectrum on this axis has. @throws AxisError when the axis does not cover the model's. */
  expected(axis: AxisSpec | undefined): number {
    return this.#way(axis).points;
  }

  /** Brings `values` to the model's axis and scores them into `score`. The spectrum must be valid. */
  run(values: Float64Array, axis: AxisSpec | undefined): Score {
    this.#bringInto(values, axis, this.onAxis);
    scoreInto(this.onAxis, this.compiled, this.score);
    return this.score;
  }

  /** `values` on the model's axis, in an array of its own. @throws AxisError */
  brought(values: Float64Array, axis: AxisSpec | undefined): Float64Array {
    const out = new Float64Array(this.compiled.channels);
    this.#bringInto(values, axis, out);
    return out;
  }

  /** Which regions make T² and Q of the spectrum that was scored last. */
  explained(): Explained {
    return explainedOf(explain(this.onAxis, this.compiled), this.compiled);
  }

  /** Contributions of the spectrum that was scored last; made ready when they are first asked for. */
  get contributions(): Contributions {
    this.#contributions ??= new Contributions(this.compiled);
    return this.#contributions;
  }

  /** Do the model's steps take a derivative? A residual then tells of slopes. */
  get slopes(): boolean {
    return takesSlopes(this.compiled);
  }

  #bringInto(values: Float64Array, axis: AxisSpec | undefined, out: Float64Array): void {
    const { bring } = this.#way(axis);
    if (bring) bring(values, out);
    else out.set(values);
  }

  #way(spec: AxisSpec | undefined): {
    bring: Bring | undefined;
    points: number;
  } {
    if (!spec) return { bring: undefined, points: this.compiled.channels };
    const key = JSON.stringify(spec);
    const known = this.#ways.get(key);
    if (known) return known;
    const axis = axisFromSpec(spec);
    const bring = sameAxis(axis, this.compiled.axis) ? undefined : resampler(axis, this.compiled.axis);
    if (this.#ways.size >= mostAxes) this.#ways.clear();
    const way = { bring, points: axis.points.length };
    this.#ways.set(key, way);
    return way;
  }
}
