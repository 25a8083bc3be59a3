/**
 * The stretch of time that all lanes show. Live: it ends at the present and moves with it. Since: its end moves with the present, its beginning
 * stands (of a shift). Stopped: it stands.
 * Pure values; whoever changes one makes a new one.
 */
export type TimeWindow =
  | { kind: "live"; spanMs: number }
  | { kind: "since"; from: number }
  | { kind: "stopped"; from: number; to: number };

const minute = 60_000;
const hour = 60 * minute;
const day = 24 * hour;

export const presets = [
  { name: "15 min", spanMs: 15 * minute },
  { name: "1 h", spanMs: hour },
  { name: "8 h", spanMs: 8 * hour },
  { name: "24 h", spanMs: day },
  { name: "7 d", spanMs: 7 * day },
  { name: "30 d", spanMs: 30 * day },
] as const;

export const shortestMs = minute;
export const longestMs = 400 * day;

export function isLive({ kind }: TimeWindow): boolean {
  return kind !== "stopped";
}

export function edges(window: TimeWindow, now: number): { from: number; to: number } {
  switch (window.kind) {
    case "live":
      return { from: now - window.spanMs, to: now };
    case "since":
      // The clock may stand at the very beginning, or years after it.
      return { from: Math.max(now - longestMs, Math.min(window.from, now - shortestMs)), to: now };
    case "stopped":
      return { from: window.from, to: window.to };
  }
}

export function span(window: TimeWindow, now: number): number {
  const { from, to } = edges(window, now);
  return to - from;
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
 * Widens (factor > 1) or narrows the window about a moment. A live one keeps its end at the present and stays live: whoever looks
 * closer at the last hour must not lose the next reading by it.
 */
export function zoom(window: TimeWindow, factor: number, about: number, now: number): TimeWindow {
  const wanted = Math.min(longestMs, Math.max(shortestMs, span(window, now) * factor));
  if (window.kind !== "stopped") return { kind: "live", spanMs: wanted };
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
  const half = span(window, now) / 2;
  if (at + half >= now) return { kind: "stopped", from: now - 2 * half, to: now };
  return { kind: "stopped", from: at - half, to: at + half };
}

/** The window widened or narrowed to a span, its end where it is. */
export function spanning(window: TimeWindow, spanMs: number, now: number): TimeWindow {
  return zoom(window, spanMs / span(window, now), edges(window, now).to, now);
}

/** From one moment to another; one that would reach past the present ends there, and moves on with it. */
export function between(from: number, to: number, now: number): TimeWindow {
  return to >= now ? { kind: "since", from } : { kind: "stopped", from, to };
}

/**
 * A stretch that holds the window with some room, in steps: it stays the same while a window moves on or is zoomed a little, so that what is
 * asked for by it is not asked for anew at every drawing. At most four times as long as the window.
 */
export function stretchAbout({ from, to }: { from: number; to: number }): { from: number; to: number } {
  const step = 2 ** Math.ceil(Math.log2((to - from) / 2));
  return { from: Math.floor(from / step) * step, to: Math.ceil(to / step) * step };
}
