import type { AlarmStateWord, OutOfService, Shelving, Suppression } from "../messages/index.ts";

/** Where an alarm stands among the states A–F of ISA-18.2-2016 / IEC 62682. Set aside (G, H, I), it stands nowhere: "normal". */
export type Standing = Exclude<AlarmStateWord, "shelved" | "suppressed" | "out of service">;

/** What raised an alarm. */
export interface Activation {
  /** when the condition began to hold, and when the alarm was raised; process time, epoch ms */
  since: number;
  raisedAt: number;
  /** the evidence when it was raised, in words */
  says: string;
  /** the limit set that judged it */
  limitSet: number;
}

/**
 * One alarm of one stream. Plain data, kept in the store. An alarm that is normal, and not set aside, has no state at all.
 *
 * The condition, the standing and the three ways of being set aside are kept apart: shelved (G), suppressed by design (H) and out of
 * service (I) may overlap, and while any of them holds the alarm goes on being evaluated and recorded; only the annunciation stops.
 */
export interface AlarmState {
  /** the condition holds, after its delays */
  active: boolean;
  standing: Standing;
  /** the last one; absent once nothing of it is left to show */
  activation?: Activation;
  /** annunciations since anybody acknowledged it */
  times: number;
  clearedAt?: number;
  acknowledgedAt?: number;
  acknowledgedBy?: string;
  shelved?: Shelving;
  suppressed?: Suppression;
  outOfService?: OutOfService;
}

/** What a person does without further ado. */
export interface Remark {
  kind: "acknowledge" | "reset" | "unshelve" | "return to service";
  at: number;
  by: string;
  note?: string;
}

export type AlarmEvent =
  | ({ kind: "raise"; at: number } & Omit<Activation, "raisedAt">)
  | { kind: "clear"; at: number }
  | Remark
  /** `forMs` absent: once, for the present activation */
  | { kind: "shelve"; at: number; by: string; reason: string; forMs?: number }
  | { kind: "take out of service"; at: number; by: string; reason: string; until?: number }
  /** the process comes into a state in which the alarm means nothing */
  | { kind: "suppress"; at: number; state: string }
  /** the process has left that state: the suppression ends at `until`, process time */
  | { kind: "leave suppressing state"; at: number; until: number }
  | { kind: "process time"; at: number }
  | { kind: "wall clock"; at: number };

/** What a person does to an alarm. */
export type AlarmCommand = Extract<AlarmEvent, { by: string }>;

export type AlarmRecord =
  | { kind: "raised" | "raised again" | "annunciated anew" | "raised unannounced"; at: number; says: string }
  | { kind: "cleared" | "cleared unannounced"; at: number }
  | { kind: "acknowledged" | "reset"; at: number; by: string; note?: string }
  | { kind: "shelved" | "taken out of service"; at: number; by: string; reason: string; until?: number; once?: boolean }
  /** `by` is absent when it ended by itself: `why` says what ended it */
  | { kind: "unshelved" | "returned to service"; at: number; by?: string; why?: string; note?: string }
  | { kind: "suppressed" | "suppression ended"; at: number; state: string }
  | { kind: "rejected"; at: number; by: string; command: AlarmCommand["kind"]; why: string };

/** What of an alarm's rule its lifecycle depends on. */
export interface LifecycleRules {
  /** false: for the record only, nobody is asked for anything */
  annunciates: boolean;
  latching: boolean;
  mostShelvedMs: number;
  /** annunciated anew when it has stood acknowledged for so long, wall clock */
  remindAfterMs?: number;
}

/** The state's word; undefined stands for an alarm that was never raised. Where several hold, the one that takes most to end. */
export function stateWord(state: AlarmState | undefined): AlarmStateWord {
  if (!state) return "normal";
  if (state.outOfService) return "out of service";
  if (state.suppressed) return "suppressed";
  return state.shelved ? "shelved" : state.standing;
}

/** Shelved, suppressed by design or out of service: it annunciates nothing. */
export function isSetAside(state: AlarmState | undefined): boolean {
  return state !== undefined && (state.shelved ?? state.suppressed ?? state.outOfService) !== undefined;
}

/** Does it ask somebody to acknowledge it? */
export function waits(state: AlarmState | undefined): boolean {
  switch (state?.standing) {
    case "unacknowledged":
    case "returned unacknowledged":
    case "latched unacknowledged":
      return true;
    default:
      return false;
  }
}
