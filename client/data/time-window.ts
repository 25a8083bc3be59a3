/**
 * The stretch of time that all lanes show. Live: it ends at the present and moves with it. Stopped: it stands.
 * Pure values; whoever changes one makes a new one.
 */
export type TimeWindow = { kind: "live"; spanMs: number } | { kind: "stopped"; from: number; to: number };

const minute = 60_000;
const hour = 60 * minute;
const day = 24 * hour;

export const presets = [
  { name: "15 min", spanMs: 15 * minute },
  { name: "1 h", spanMs: hour },
  { name: "8 h", spanMs: 8 * hour },
  { name: "24 h", spanMs: day },
  { name: "7 d", spanMs: 7 * day },
  { name: "14 d", spanMs: 14 * day },
] as const;

export const shortestMs = minute;
export const longestMs = 60 * day;

export function edges(window: TimeWindow, now: number): { from: number; to: number } {
  return window.kind === "live" ? { from: now - window.spanMs, to: now } : { from: window.from, to: window.to };
}

export function span(window: TimeWindow): number {
  return window.kind === "live" ? window.spanMs : window.to - window.from;
}

/** Moves the window by a share of its span: −0.5 is half a window into the past. A window that would reach past the present is live again. */
export function pan(window: TimeWindow, share: number, now: number): TimeWindow {
  const { from, to } = edges(window, now);
  const by = (to - from) * share;
  if (by === 0) return window;
  if (to + by >= now) return { kind: "live", spanMs: to - from };
  return { kind: "stopped", from: from + by, to: to + by };
}

/**
 * Widens (factor > 1) or narrows the window about a moment. A live window keeps its end at the present and stays live: whoever looks
 * closer at the last hour must not lose the next reading by it.
 */
export function zoom(window: TimeWindow, factor: number, about: number, now: number): TimeWindow {
  const wanted = Math.min(longestMs, Math.max(shortestMs, span(window) * factor));
  if (window.kind === "live") return { kind: "live", spanMs: wanted };
  const share = (about - window.from) / (window.to - window.from);
  const from = about - wanted * Math.min(1, Math.max(0, share));
  if (from + wanted >= now) return { kind: "live", spanMs: wanted };
  return { kind: "stopped", from, to: from + wanted };
}

/** The window with its end fixed where it is now. */
export function stopAt(window: TimeWindow, now: number): TimeWindow {
  return { kind: "stopped", ...edges(window, now) };
}

/** A stopped window of the same span in which `at` stands in the middle; live when `at` is too near to the present for that. */
export function centredOn(window: TimeWindow, at: number, now: number): TimeWindow {
  const half = span(window) / 2;
  if (at + half >= now) return { kind: "stopped", from: now - 2 * half, to: now };
  return { kind: "stopped", from: at - half, to: at + half };
}
