import { type CompiledModel, qContributions, rotationsOf, t2Contributions } from "../pls/index.ts";
import type { Axis } from "../spectrum/index.ts";

/** Places on the axis that contributions are kept by: an excursion remembers as many numbers, and they are written with every commit. */
const mostPlaces = 400;

/**
 * Contributions of the spectrum that was scored last to T² and Q, by place on the axis: channel by channel, or neighbouring channels together
 * where there are more than 400. Meant for the readings beyond a limit; the rotations are made once.
 */
export class Contributions {
  /** the middle of each place, unit of the model's axis */
  readonly axis: Axis;
  readonly #compiled: CompiledModel;
  readonly #width: number;
  readonly #rotations: Float64Array[];
  readonly #stepped: Float64Array;
  readonly #inverse: Float64Array;

  constructor(compiled: CompiledModel) {
    const { axisAfter, model, components } = compiled;
    const rows = (matrix: number[][] = []) => matrix.map((row) => Float64Array.from(row));
    this.#compiled = compiled;
    this.#width = Math.ceil(axisAfter.points.length / mostPlaces);
    this.#rotations = rotationsOf(rows(model.weights), rows(model.loadings));
    this.#stepped = new Float64Array(axisAfter.points.length);
    this.#inverse = new Float64Array(components);
    const points = this.#gather(axisAfter.points).map((sum, i) => sum / this.#count(i));
    this.axis = { ...axisAfter, points };
  }

  /** e_j² with the sign of e_j. The kernel's memory holds e: nothing else may have been scored since. */
  q(): Float64Array {
    const { kernel, judges } = this.#compiled;
    return judges.q ? this.#gather(qContributions(kernel.x)) : new Float64Array(0);
  }

  /** x_j (R S⁻¹ t)_j. @param onAxis the spectrum that was scored last, before the model's steps */
  t2(onAxis: Float64Array): Float64Array {
    const { kernel, components: A } = this.#compiled;
    if (!kernel.space) return new Float64Array(0);
    kernel.apply(onAxis, this.#stepped);
    // S⁻¹t = L⁻ᵀz
    for (let a = 0; a < A; a++) {
      let sum = 0;
      for (let b = a; b < A; b++) sum += kernel.space.whiten[b * A + a] * kernel.z[b];
      this.#inverse[a] = sum;
    }
    return this.#gather(t2Contributions(this.#stepped, this.#rotations, this.#inverse));
  }

  #gather(values: ArrayLike<number>): Float64Array {
    const width = this.#width;
    if (width === 1) return Float64Array.from(values);
    const sums = new Float64Array(Math.ceil(values.length / width));
    for (let j = 0; j < values.length; j++) sums[Math.floor(j / width)] += values[j];
    return sums;
  }

  #count(place: number): number {
    return Math.min(this.#width, this.#stepped.length - place * this.#width);
  }
}
