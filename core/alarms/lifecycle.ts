import type { AlarmStateWord } from "../messages/index.ts";

/**
 * One alarm of one stream. `active`: the condition holds (after its delays); `unacknowledged`: it has been annunciated and nobody has said
 * "seen". The state of IEC 62682 / ISA-18.2-2016 follows from the two.
 */
export interface AlarmState {
  active: boolean;
  unacknowledged: boolean;
  /** when the condition began to hold, and when it was annunciated; process time, epoch ms */
  since: number;
  raisedAt: number;
  clearedAt?: number;
  acknowledgedAt?: number;
  acknowledgedBy?: string;
  /** the evidence when it was raised, in words */
  says: string;
  /** the limit set that judged it */
  limitSet: number;
}

export type AlarmEvent =
  | { kind: "raise"; at: number; since: number; says: string; limitSet: number }
  | { kind: "clear"; at: number }
  | { kind: "acknowledge"; at: number; by: string; note?: string };

export type AlarmRecord =
  | { kind: "raised" | "raised again"; at: number; says: string }
  | { kind: "cleared"; at: number }
  | { kind: "acknowledged"; at: number; by: string; note?: string }
  | { kind: "rejected"; at: number; why: string };

/** The state's word; undefined stands for an alarm that was never raised. */
export function stateWord(state: AlarmState | undefined): AlarmStateWord {
  if (!state) return "normal";
  if (state.active) return state.unacknowledged ? "unacknowledged" : "acknowledged";
  return state.unacknowledged ? "returned unacknowledged" : "normal";
}

/**
 * The next state of one alarm, and what has to be put on record. Pure: no clock, no store, `state` is not changed; the same events always
 * give the same records. An alarm that is normal again is undefined. States A–D of ISA-18.2-2016 / IEC 62682.
 */
export function advance(state: AlarmState | undefined, event: AlarmEvent): [AlarmState | undefined, AlarmRecord[]] {
  switch (event.kind) {
    case "raise": {
      if (state?.active) return [state, []];
      const { at, since, says, limitSet } = event;
      // A → B, or D → B: it came again before anybody saw that it had gone.
      const kind = state ? "raised again" : "raised";
      return [
        {
          active: true,
          unacknowledged: true,
          since,
          raisedAt: at,
          says,
          limitSet,
        },
        [{ kind, at, says }],
      ];
    }
    case "clear": {
      if (!state?.active) return [state, []];
      const records: AlarmRecord[] = [{ kind: "cleared", at: event.at }];
      // B → D keeps asking for the acknowledgement; C → A is done.
      return state.unacknowledged ? [{ ...state, active: false, clearedAt: event.at }, records] : [undefined, records];
    }
    case "acknowledge": {
      const { at, by, note } = event;
      if (!state?.unacknowledged) {
        const why = state ? `already acknowledged by ${state.acknowledgedBy}` : "nothing to acknowledge";
        return [state, [{ kind: "rejected", at, why }]];
      }
      const records: AlarmRecord[] = [{ kind: "acknowledged", at, by, ...(note ? { note } : {}) }];
      return state.active
        ? [
            {
              ...state,
              unacknowledged: false,
              acknowledgedAt: at,
              acknowledgedBy: by,
            },
            records,
          ]
        : [undefined, records];
    }
    default:
      return event satisfies never;
  }
}
