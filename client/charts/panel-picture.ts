import type { Region } from "../../core/messages/index.ts";

export interface PanelLine {
  /** written at the line's right end */
  label: string;
  values: readonly (number | null)[];
  manner: "reading" | "model" | "calibration";
}

/** One panel over the wavelengths: lines, or bars about zero. All arrays are as long as `axis`, which ascends. */
export interface PanelPicture {
  title: string;
  axis: readonly number[];
  unit: "nm" | "cm-1";
  lines: readonly PanelLine[];
  /** lowest and highest of the calibration, channel by channel */
  range?: { low: readonly number[]; high: readonly number[]; label: string };
  bars?: { values: readonly number[]; colour: "far" | "odd" | "quiet"; label: string };
  regions?: readonly Region[];
}

/** The lowest and highest value that a panel has to show, with a little room; bars always with zero. */
export function panelRange({ lines, range, bars }: PanelPicture): [number, number] {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  const columns = [...lines.map(({ values }) => values), range?.low ?? [], range?.high ?? [], bars?.values ?? []];
  for (const column of columns) {
    for (const value of column) {
      if (value === null) continue;
      low = Math.min(low, value);
      high = Math.max(high, value);
    }
  }
  if (bars) [low, high] = [Math.min(0, low), Math.max(0, high)];
  if (!Number.isFinite(low)) return [0, 1];
  const room = (high - low || Math.abs(high) || 1) * 0.06;
  return [bars && low === 0 ? 0 : low - room, bars && high === 0 ? 0 : high + room * (bars ? 3 : 1)];
}
