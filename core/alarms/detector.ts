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
  delays: { onDelay: Delay; offDelay: Delay },
): [DetectorState, Signal] {
  if (condition === "none") return [state, { kind: "none" }];
  const { onDelay, offDelay } = delays;
  const beyond = condition === "beyond";
  const clear = condition === "clear";
  const span = onDelay.of ?? onDelay.readings;
  const recent = [...state.recent, beyond ? 1 : 0].slice(-span);
  const next: DetectorState = {
    active: state.active,
    recent,
    clearRun: clear ? state.clearRun + 1 : 0,
    beyondSince: beyond ? (state.beyondSince ?? at) : clear ? null : state.beyondSince,
    clearSince: clear ? (state.clearSince ?? at) : null,
  };
  const beyondSince = next.beyondSince ?? at;
  if (!state.active && beyond && sum(recent) >= onDelay.readings && lasted(beyondSince, at, onDelay)) {
    return [
      { ...next, active: true },
      { kind: "raise", since: beyondSince },
    ];
  }
  if (state.active && clear && next.clearRun >= offDelay.readings && lasted(next.clearSince ?? at, at, offDelay)) {
    return [{ ...next, active: false, recent: [] }, { kind: "clear" }];
  }
  return [next, { kind: "none" }];
}

/** After a gap in the data nobody knows what happened in it: runs that were under way begin anew; a decided alarm stays. */
export function afterGap(state: DetectorState): DetectorState {
  return { ...restingDetector, active: state.active };
}

function lasted(since: number, at: number, delay: Delay): boolean {
  return at - since >= (delay.seconds ?? 0) * 1000;
}

function sum(flags: readonly number[]): number {
  return flags.reduce((total, flag) => total + flag, 0);
}
