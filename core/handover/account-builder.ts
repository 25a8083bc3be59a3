import type { PropertyAccount, StreamAccount, TimeKind, Verdict } from "../messages/index.ts";

/** What of a property is to be told. */
export interface WantedProperty {
  name: string;
  unit: string;
  target?: [number, number];
  decimals: number;
}

/** Values of one property among readings that were inside: how many, their sum and bounds. */
export interface TrustedValues {
  n: number;
  sum: number;
  min: number;
  max: number;
}

/** A run of readings that one verdict holds for, without a gap in it; a single reading is one whose `first` is its `last`. Epoch ms. */
export interface Run {
  first: number;
  last: number;
  readings: number;
  verdict: Verdict;
  /** property by property; undefined where it has no trusted value */
  values: readonly (TrustedValues | undefined)[];
}

const noTime = (): Record<TimeKind, number> => ({
  unusable: 0,
  unfamiliar: 0,
  extrapolated: 0,
  sparse: 0,
  inside: 0,
  "no data": 0,
});

/**
 * Adds up a stream's time, run by run in the order of time. A reading stands for the time until the next one; a gap on record stands for
 * nothing, and so does the time before the first reading and after the last unless `hold` and `finish` say otherwise.
 */
export class AccountBuilder {
  readonly #from: number;
  readonly #ms = noTime();
  readonly #gaps: [number, number][] = [];
  readonly #wanted: readonly WantedProperty[];
  readonly #sums: (TrustedValues & { outsideMs: number })[];
  #readings = 0;
  /** what stands at present, and since when; null: nothing does */
  #standing: Pick<Run, "verdict" | "values"> | null = null;
  #since: number;

  constructor(wanted: readonly WantedProperty[], from: number) {
    this.#wanted = wanted;
    this.#from = from;
    this.#since = from;
    this.#sums = wanted.map(() => ({ n: 0, sum: 0, min: Infinity, max: -Infinity, outsideMs: 0 }));
  }

  /** The reading before the stretch still stands at its beginning. */
  hold(verdict: Verdict, values: Run["values"]): void {
    this.#standing = { verdict, values };
  }

  /** @param afterGap a gap on record ends with the run's first reading; it began at the reading before */
  add(run: Run, afterGap: boolean): void {
    if (afterGap) this.#standing = null;
    this.#passTo(run.first);
    this.#standing = run;
    this.#passTo(run.last);
    this.#readings += run.readings;
    run.values.forEach((values, i) => {
      if (!values) return;
      const sums = this.#sums[i];
      sums.n += values.n;
      sums.sum += values.sum;
      sums.min = Math.min(sums.min, values.min);
      sums.max = Math.max(sums.max, values.max);
    });
  }

  /** @param heldUntil until when the last reading stands; the rest up to `to` is without data */
  finish(to: number, heldUntil: number): StreamAccount {
    this.#passTo(Math.max(this.#since, Math.min(to, heldUntil)));
    this.#standing = null;
    this.#passTo(to);
    return {
      readings: this.#readings,
      ms: this.#ms,
      gaps: this.#gaps,
      properties: this.#wanted.map((wanted, i) => accountOf(wanted, this.#sums[i])),
    };
  }

  #passTo(time: number): void {
    const ms = time - this.#since;
    if (ms <= 0) return;
    if (this.#standing) {
      this.#ms[this.#standing.verdict] += ms;
      this.#standing.values.forEach((values, i) => {
        if (values && isOutside(values, this.#wanted[i].target)) this.#sums[i].outsideMs += ms;
      });
    } else {
      this.#ms["no data"] += ms;
      const last = this.#gaps.at(-1);
      if (last && last[1] === this.#since && this.#since > this.#from) last[1] = time;
      else this.#gaps.push([this.#since, time]);
    }
    this.#since = time;
  }
}

/** Are the values of a run on one side of their target's edges, so that the run can be counted as a whole? */
export function isOneSided({ min, max }: TrustedValues, target: readonly [number, number] | undefined): boolean {
  if (!target) return true;
  const [low, high] = target;
  return max < low || min > high || (min >= low && max <= high);
}

function isOutside({ min, max }: TrustedValues, target: readonly [number, number] | undefined): boolean {
  return target !== undefined && (max < target[0] || min > target[1]);
}

function accountOf(
  { name, unit, target, decimals }: WantedProperty,
  { n, sum, min, max, outsideMs }: TrustedValues & { outsideMs: number },
): PropertyAccount {
  return {
    ...{ name, unit, decimals },
    ...(target ? { target } : {}),
    mean: n > 0 ? sum / n : null,
    min: n > 0 ? min : null,
    max: n > 0 ? max : null,
    outsideMs,
  };
}
