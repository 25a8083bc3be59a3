import type { Region } from "../messages/index.ts";
import type { Axis } from "../spectrum/index.ts";

/**
 * Gathers contributions by channel into the few regions that a person can look at: neighbouring channels of a spectrum move together.
 *
 * The contributions are smoothed over a hundredth of the channels, so that noise which changes sign from channel to channel does not
 * split a band; a region is a stretch whose smoothed contribution keeps one sign and stays above a twentieth of the largest. Its share
 * is that of the absolute contributions as they are, unsmoothed. Regions under 3 % are left out; the largest comes first.
 *
 * @param contributions one for each point of the axis, with signs
 */
export function regionsOf(contributions: ArrayLike<number>, { unit, points }: Axis): Region[] {
  const p = points.length;
  let total = 0;
  for (let j = 0; j < p; j++) total += Math.abs(contributions[j]);
  if (!(total > 0)) return [];
  const smooth = smoothed(contributions, Math.round(p / 200));
  const least = 0.05 * smooth.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  const regions: Region[] = [];
  for (let first = 0; first < p; ) {
    const sign = Math.abs(smooth[first]) > least ? Math.sign(smooth[first]) : 0;
    let last = first;
    let sum = Math.abs(contributions[first]);
    while (last + 1 < p && signOf(smooth[last + 1], least) === sign) {
      last++;
      sum += Math.abs(contributions[last]);
    }
    if (sign !== 0 && sum / total >= 0.03) {
      const ends = [points[first], points[last]];
      regions.push({ from: Math.min(...ends), to: Math.max(...ends), unit, share: sum / total, sign });
    }
    first = last + 1;
  }
  return regions.sort((a, b) => b.share - a.share);
}

function signOf(value: number, least: number): number {
  return Math.abs(value) > least ? Math.sign(value) : 0;
}

/** Running mean over 2 · half + 1 channels, fewer at the ends. */
function smoothed(values: ArrayLike<number>, half: number): Float64Array {
  return Float64Array.from({ length: values.length }, (_, j) => {
    const first = Math.max(0, j - half);
    const last = Math.min(values.length - 1, j + half);
    let sum = 0;
    for (let k = first; k <= last; k++) sum += values[k];
    return sum / (last - first + 1);
  });
}
