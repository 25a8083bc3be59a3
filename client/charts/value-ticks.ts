/** Round steps of an axis: 1, 2, 2.5 or 5 times a power of ten. At most `most` of them between `low` and `high`. */
export function valueStep(low: number, high: number, most: number): number {
  const raw = (high - low) / Math.max(1, most);
  const magnitude = 10 ** Math.floor(Math.log10(raw));
  const factor = [1, 2, 2.5, 5, 10].find((each) => each * magnitude >= raw * (1 - 1e-9)) ?? 10;
  return factor * magnitude;
}

export function valueTicks(low: number, high: number, most: number): number[] {
  const step = valueStep(low, high, most);
  const ticks: number[] = [];
  for (let index = Math.ceil(low / step - 1e-9); index * step <= high + step * 1e-9; index++) ticks.push(index * step);
  return ticks;
}

/** Moves labels apart that would overlap, as little as it can, keeping their order and the room [low, high]. Positions in px, any order. */
export function spreadLabels(positions: readonly number[], apart: number, low: number, high: number): number[] {
  const order = positions.map((_, index) => index).sort((a, b) => positions[a] - positions[b]);
  const placed = [...positions];
  order.forEach((index, rank) => {
    const floor = rank === 0 ? low : placed[order[rank - 1]] + apart;
    placed[index] = Math.max(placed[index], floor);
  });
  for (let rank = order.length - 1; rank >= 0; rank--) {
    const ceiling = rank === order.length - 1 ? high : placed[order[rank + 1]] - apart;
    placed[order[rank]] = Math.min(placed[order[rank]], ceiling);
  }
  return placed;
}
