/** A calibration sample and how far a reading is from it, in standard deviations of the calibration scores. */
export interface Neighbour {
  name: string;
  distance: number;
}

/**
 * The calibration samples nearest to a reading in the space of the scores, each component measured in its own standard deviation (n − 1) over
 * the samples: the scores of a PLS calibration by NIPALS are uncorrelated, so this is the Mahalanobis distance.
 *
 * @param scores  of the reading, one a component
 * @param samples names, and the scores sample by sample
 */
export function nearestSamples(
  scores: readonly number[],
  samples: { names: readonly string[]; scores: readonly (readonly number[])[] },
  most: number,
): Neighbour[] {
  const count = samples.scores.length;
  if (count < 2) return [];
  const deviation = scores.map((_, a) => {
    const mean = samples.scores.reduce((sum, row) => sum + row[a], 0) / count;
    return Math.sqrt(samples.scores.reduce((sum, row) => sum + (row[a] - mean) ** 2, 0) / (count - 1));
  });
  return samples.scores
    .map((row, index) => ({
      name: samples.names[index],
      distance: Math.sqrt(scores.reduce((sum, score, a) => sum + ((score - row[a]) / deviation[a]) ** 2, 0)),
    }))
    .sort((a, b) => a.distance - b.distance)
    .slice(0, most);
}
