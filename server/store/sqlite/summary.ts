import { isInside } from "../../../core/messages/index.ts";

/** How often, how much, and between which bounds one quantity was. */
export class Spread {
  n = 0;
  sum = 0;
  min = Number.POSITIVE_INFINITY;
  max = Number.NEGATIVE_INFINITY;

  add(value: number): void {
    this.join(1, value, value, value);
  }
  join(n: number, sum: number, min: number, max: number): void {
    this.n += n;
    this.sum += sum;
    if (min < this.min) this.min = min;
    if (max > this.max) this.max = max;
  }
  get mean(): number | null {
    return this.n > 0 ? this.sum / this.n : null;
  }
  get least(): number | null {
    return this.n > 0 ? this.min : null;
  }
  get most(): number | null {
    return this.n > 0 ? this.max : null;
  }
}

/** What the row of a reading says of it. */
export interface SummedReading {
  time: number;
  verdict: number;
  t2: number | null;
  q: number | null;
  /** value and uncertainty of each of the model's properties, float64, little-endian; NaN stands for none */
  numbers: Buffer;
}

/** What the row of a roll-up says of the readings in it: `numbers` as `Summary.numbers` lays them out. */
export interface SummedStretch {
  count: number;
  verdict: number;
  first: number;
  last: number;
  numbers: Buffer;
}

const bytes = 8;
/**
 * T² ratio and Q ratio: count, sum, largest. Then each property: count, sum, smallest, largest; its uncertainty: count, sum; count and sum
 * over the readings that were inside.
 */
const head = 6;
const perProperty = 8;

/**
 * Readings of a stretch of time, summed: what a trend shows of one interval, and what a roll-up keeps of one minute or hour. Summaries join
 * to exactly what all their readings together would have given (sums but for the order of adding).
 */
export class Summary {
  count = 0;
  /** union of the verdict masks */
  verdict = 0;
  first = Number.POSITIVE_INFINITY;
  last = Number.NEGATIVE_INFINITY;
  readonly t2 = new Spread();
  readonly q = new Spread();
  readonly values: Spread[];
  readonly uncertainties: Spread[];
  /** the values of readings that were inside, and no others */
  readonly trusted: Spread[];

  constructor(properties: number) {
    this.values = Array.from({ length: properties }, () => new Spread());
    this.uncertainties = Array.from({ length: properties }, () => new Spread());
    this.trusted = Array.from({ length: properties }, () => new Spread());
  }

  /**
   * The mean of a property: over the readings that were inside, as long as there are any. What the model cannot support stays out of an
   * average (ASTM D6122); where it is all there is, its mean is given, and the verdict says what it is worth.
   */
  mean(property: number): number | null {
    return this.trusted[property].mean ?? this.values[property].mean;
  }

  /** `places[i]` tells where property i of this summary stands among those of the reading's model; −1: it has none such. */
  addReading({ time, verdict, t2, q, numbers }: SummedReading, places: readonly number[]): void {
    this.#note(1, verdict, time, time);
    if (t2 !== null) this.t2.add(t2);
    if (q !== null) this.q.add(q);
    for (let i = 0; i < places.length; i++) {
      if (places[i] < 0) continue;
      const at = 2 * bytes * places[i];
      const value = numbers.readDoubleLE(at);
      const uncertainty = numbers.readDoubleLE(at + bytes);
      if (!Number.isNaN(value)) this.values[i].add(value);
      if (!Number.isNaN(value) && isInside(verdict)) this.trusted[i].add(value);
      if (!Number.isNaN(uncertainty)) this.uncertainties[i].add(uncertainty);
    }
  }

  /** `places` as in `addReading`. */
  addStretch({ count, verdict, first, last, numbers }: SummedStretch, places: readonly number[]): void {
    this.#note(count, verdict, first, last);
    const read = (at: number) => numbers.readDoubleLE(bytes * at);
    this.t2.join(read(0), read(1), Number.POSITIVE_INFINITY, read(2));
    this.q.join(read(3), read(4), Number.POSITIVE_INFINITY, read(5));
    for (let i = 0; i < places.length; i++) {
      if (places[i] < 0) continue;
      const at = head + perProperty * places[i];
      this.values[i].join(read(at), read(at + 1), read(at + 2), read(at + 3));
      this.uncertainties[i].join(read(at + 4), read(at + 5), Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY);
      this.trusted[i].join(read(at + 6), read(at + 7), Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY);
    }
  }

  /** Its sums and bounds as bytes, for the row of a roll-up. */
  get numbers(): Buffer {
    const { t2, q, values, uncertainties, trusted } = this;
    const numbers = new Float64Array(head + perProperty * values.length);
    numbers.set([t2.n, t2.sum, t2.max, q.n, q.sum, q.max]);
    values.forEach(({ n, sum, min, max }, i) => {
      const others = [uncertainties[i].n, uncertainties[i].sum, trusted[i].n, trusted[i].sum];
      numbers.set([n, sum, min, max, ...others], head + perProperty * i);
    });
    return Buffer.from(numbers.buffer);
  }

  #note(count: number, verdict: number, first: number, last: number): void {
    this.count += count;
    this.verdict |= verdict;
    if (first < this.first) this.first = first;
    if (last > this.last) this.last = last;
  }
}
