import type { Delay } from "../limit-set/index.ts";

/**
 * What one reading says about one condition. between: inside the deadband, neither beyond the limit nor clear of it. none: this reading has
 * no say (a property alarm that is held).
 */
export type Condition = "beyond" | "between" | "clear" | "none";

/** The memory of one detector. Plain data: it is kept in the store and comes back after a restart. */
export interface DetectorState {
  /** the alarm condition as decided, after the delays */
  active: boolean;
  /** of the last readings (at most `onDelay.of`), which were beyond: 1 or 0, oldest first */
  recent: number[];
  /** readings in a row that were clear */
  clearRun: number;
  /** when the present run of readings beyond began; null when the last one with a say was clear */
  beyondSince: number | null;
  /** when the present run of clear readings began */
  clearSince: number | null;
}

export const restingDetector: DetectorState = {
  active: false,
  recent: [],
  clearRun: 0,
  beyondSince: null,
  clearSince: null,
};

export type Signal = { kind: "raise"; since: number } | { kind: "clear" } | { kind: "none" };

/**
 * One reading through the on- and off-delay of an alarm. Pure; `at` is process time, epoch ms.
 *
 * Raises when the condition was beyond in k of the last n readings (n in a row when k = n) and the run has lasted `seconds`; clears when
 * k readings in a row were clear, and for `seconds`. k-of-n as in Adnan, Cheng, Izadi & Chen, J. Process Control 23 (2013) 382.
 */
export function detect(
  state: DetectorState,
  condition: Condition,
  at: number,
  delays: Delays,
): [DetectorState, Signal] {
  if (condition === "none") return [state, { kind: "none" }];
  const next = { ...state, recent: [...state.recent] };
  const kind = detectInPlace(next, condition, at, delays);
  return [next, kind === "raise" ? { kind, since: next.beyondSince ?? at } : { kind }];
}

export interface Delays {
  onDelay: Delay;
  offDelay: Delay;
}

/** The same on a detector that is the caller's own, and is changed: a rehearsal takes millions of these steps. */
export function detectInPlace(
  state: DetectorState,
  condition: Condition,
  at: number,
  { onDelay, offDelay }: Delays,
): Signal["kind"] {
  if (condition === "none") return "none";
  const beyond = condition === "beyond";
  const span = onDelay.of ?? onDelay.readings;
  // At rest, and nothing of what is remembered was beyond: one more that is clear tells nothing new.
  if (!state.active && condition === "clear" && state.clearRun >= span) return "none";
  const { recent } = state;
  recent.push(beyond ? 1 : 0);
  while (recent.length > span) recent.shift();
  if (condition === "clear") {
    state.clearRun++;
    state.clearSince ??= at;
    state.beyondSince = null;
  } else {
    state.clearRun = 0;
    state.clearSince = null;
    if (beyond) state.beyondSince ??= at;
  }
  if (!state.active && beyond && sum(recent) >= onDelay.readings && lasted(state.beyondSince ?? at, at, onDelay)) {
    state.active = true;
    return "raise";
  }
  if (
    state.active &&
    condition === "clear" &&
    state.clearRun >= offDelay.readings &&
    lasted(state.clearSince ?? at, at, offDelay)
  ) {
    state.active = false;
    state.recent = [];
    return "clear";
  }
  return "none";
}

/** After a gap in the data nobody knows what happened in it: runs that were under way begin anew; a decided alarm stays. */
export function afterGap(state: DetectorState): DetectorState {
  return { ...restingDetector, recent: [], active: state.active };
}

function lasted(since: number, at: number, delay: Delay): boolean {
  return at - since >= (delay.seconds ?? 0) * 1000;
}

function sum(flags: readonly number[]): number {
  let total = 0;
  for (let i = 0; i < flags.length; i++) total += flags[i];
  return total;
}
