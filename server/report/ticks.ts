/** Round numbers from low to high, about `count` of them: steps of 1, 2 or 5 times a power of ten. */
export function ticks(low: number, high: number, count: number): number[] {
  if (!(high > low)) return [low];
  const rough = (high - low) / count;
  const power = 10 ** Math.floor(Math.log10(rough));
  const step = [1, 2, 5, 10].map((factor) => factor * power).find((size) => size >= rough)!;
  const first = Math.ceil(low / step - 1e-9);
  const last = Math.floor(high / step + 1e-9);
  return Array.from({ length: last - first + 1 }, (_, i) => Number(((first + i) * step).toPrecision(12)));
}

/** Powers of ten, and where they are few also 2 and 5 times them. */
export function logTicks(low: number, high: number): number[] {
  const decades: number[] = [];
  for (let k = Math.floor(Math.log10(low)); k <= Math.ceil(Math.log10(high)); k++)
    decades.push(Number((10 ** k).toPrecision(3)));
  const within = (values: number[]) => values.filter((value) => value >= low * 0.999 && value <= high * 1.001);
  const found = within(decades);
  return found.length >= 3
    ? found
    : within(decades.flatMap((power) => [power, 2 * power, 5 * power].map((v) => Number(v.toPrecision(3)))));
}

/** The range of values, widened by a share on either side; a single value gets some room too. */
export function spread(values: Iterable<number>, room = 0.05): [number, number] {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const value of values) {
    if (!Number.isFinite(value)) continue;
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  if (low > high) return [0, 1];
  const width = high - low || Math.abs(high) || 1;
  return [low - room * width, high + room * width];
}
