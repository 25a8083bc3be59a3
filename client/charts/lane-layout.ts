/** Where the parts of a lane's chart stand, px from the top of the plotting area. */
export interface LaneLayout {
  trendTop: number;
  trendBottom: number;
  t2Top: number;
  qTop: number;
  strip: number;
  height: number;
}

export const axisHeight = 24;
export const padTop = 6;
/** a strip of this height has room for three words beside it */
export const wordyStrip = 38;

/**
 * @param height of the whole chart, px. The strips take a third of it: room enough for the words of their scale on a tall lane.
 * @param foot whether ribbon and time axis stand under the trend; of trends above one another only the lowest has them
 */
export function laneLayout(height: number, foot = true): LaneLayout {
  if (!foot) {
    const plot = Math.max(60, height - padTop);
    return { trendTop: 4, trendBottom: plot - 8, t2Top: plot, qTop: plot, strip: 0, height: plot };
  }
  const plot = Math.max(120, height - axisHeight - padTop);
  const strip = Math.round(Math.min(44, Math.max(26, plot * 0.18)));
  const between = strip >= wordyStrip ? 14 : 6;
  const qTop = plot - strip;
  const t2Top = qTop - between - strip;
  return { trendTop: 4, trendBottom: t2Top - 12, t2Top, qTop, strip, height: plot };
}

/** The y scale whose part [low, high] falls on the trend's rows; the ribbon lies below `low`. */
export function yRange(low: number, high: number, layout: LaneLayout): [number, number] {
  const perPx = (high - low) / (layout.trendBottom - layout.trendTop);
  return [low - perPx * (layout.height - layout.trendBottom), high + perPx * layout.trendTop];
}
