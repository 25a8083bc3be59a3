import {
  type AlarmCommand,
  type AlarmEvent,
  type AlarmRecord,
  type AlarmState,
  isSetAside,
  type LifecycleRules,
  type Remark,
  stateWord,
  waits,
} from "./alarm-state.ts";

type Step = [AlarmState | undefined, AlarmRecord[]];
const resting: AlarmState = { active: false, standing: "normal", times: 0 };
/** A clock that was set back by more than this since a shelving began has lost count of it. */
const clockSlackMs = 60_000;

/**
 * The next state of one alarm, and what has to be put on record. Pure: no clock, no store, `state` is not changed; the same events always
 * give the same records. States and transitions of ISA-18.2-2016 / IEC 62682 (from memory; the table in test/core/alarms walks every pair).
 */
export function advance(state: AlarmState | undefined, event: AlarmEvent, rules: LifecycleRules): Step {
  switch (event.kind) {
    case "raise":
      return raise(state ?? resting, event, rules);
    case "clear":
      return clear(state, event.at, rules);
    case "acknowledge":
      return acknowledge(state, event);
    case "reset":
      return reset(state, event);
    case "shelve":
      return shelve(state ?? resting, event, rules);
    case "unshelve":
      return unshelve(state, event, rules);
    case "take out of service":
      return takeOutOfService(state ?? resting, event, rules);
    case "return to service":
      return returnToService(state, event, rules);
    case "suppress":
      return suppress(state ?? resting, event);
    case "leave suppressing state":
      return state?.suppressed && state.suppressed.until === undefined
        ? [{ ...state, suppressed: { ...state.suppressed, until: event.until } }, []]
        : [state, []];
    case "process time":
      return processTime(state, event.at, rules);
    case "wall clock":
      return wallClock(state, event.at, rules);
    default:
      return event satisfies never;
  }
}

function raise(state: AlarmState, event: Extract<AlarmEvent, { kind: "raise" }>, rules: LifecycleRules): Step {
  if (state.active) return [state, []];
  const { at, since, says, limitSet } = event;
  const active = { ...state, active: true, activation: { since, raisedAt: at, says, limitSet } };
  if (isSetAside(state)) return [active, [{ kind: "raised unannounced", at, says }]];
  // A → B; D, E, F → B: it came again before it was done with.
  const kind = state.standing === "normal" ? "raised" : "raised again";
  return [annunciated(active, rules), [{ kind, at, says }]];
}

function annunciated(state: AlarmState, rules: LifecycleRules): AlarmState {
  const { clearedAt: _, acknowledgedAt: __, acknowledgedBy: ___, ...rest } = state;
  if (!rules.annunciates) return { ...rest, standing: "acknowledged" };
  return { ...rest, standing: "unacknowledged", times: state.times + 1 };
}

function clear(state: AlarmState | undefined, at: number, rules: LifecycleRules): Step {
  if (!state?.active) return [state, []];
  const cleared = { ...state, active: false };
  if (isSetAside(state)) {
    const after: Step = [withoutActivation(cleared), [{ kind: "cleared unannounced", at }]];
    return state.shelved?.once ? endOnce(after, at, rules) : after;
  }
  const records: AlarmRecord[] = [{ kind: "cleared", at }];
  const gone = { ...cleared, clearedAt: at };
  const seen = state.standing === "acknowledged";
  if (rules.latching && rules.annunciates) {
    return [{ ...gone, standing: seen ? "latched acknowledged" : "latched unacknowledged" }, records]; // B → E, C → F
  }
  return seen ? [undefined, records] : [{ ...gone, standing: "returned unacknowledged" }, records]; // C → A, B → D
}

/** Shelved once, for this activation: it is over. */
function endOnce([state, records]: Step, at: number, rules: LifecycleRules): Step {
  const [next, more] = leave(state!, "shelved", { kind: "unshelved", at, why: "its condition has gone" }, rules);
  return [next, [...records, ...more]];
}

function acknowledge(state: AlarmState | undefined, event: Remark): Step {
  const { at, by, note } = event;
  if (!state || !waits(state)) {
    const seenBy = state?.acknowledgedBy === undefined ? undefined : `already acknowledged by ${state.acknowledgedBy}`;
    return rejected(state, event, setAsideWhy(state) ?? seenBy ?? "nothing to acknowledge");
  }
  const records: AlarmRecord[] = [{ kind: "acknowledged", at, by, ...noteOf(note) }];
  const seen = { ...state, times: 0, acknowledgedAt: at, acknowledgedBy: by };
  if (state.standing === "unacknowledged") return [{ ...seen, standing: "acknowledged" }, records]; // B → C
  if (state.standing === "latched unacknowledged") return [{ ...seen, standing: "latched acknowledged" }, records]; // E → F
  return [undefined, records]; // D → A
}

function reset(state: AlarmState | undefined, event: Remark): Step {
  if (state?.standing !== "latched acknowledged") return rejected(state, event, setAsideWhy(state) ?? noReset(state));
  return [undefined, [{ kind: "reset", at: event.at, by: event.by, ...noteOf(event.note) }]]; // F → A
}

function noReset(state: AlarmState | undefined): string {
  if (state?.active) return "its condition still holds";
  return state?.standing === "latched unacknowledged" ? "not acknowledged yet" : "nothing to reset";
}

function shelve(state: AlarmState, event: Extract<AlarmEvent, { kind: "shelve" }>, rules: LifecycleRules): Step {
  const { at, by, reason, forMs } = event;
  const why = noShelf(state, event, rules);
  if (why !== undefined) return rejected(state, event, why);
  const until = at + (forMs ?? rules.mostShelvedMs);
  const once = forMs === undefined ? { once: true } : {};
  const shelved = { at, until, by, reason: reason.trim(), ...once };
  const { at: _, ...rest } = shelved;
  return [setAside(state, { shelved }), [{ kind: "shelved", at, ...rest }]];
}

function noShelf(
  { shelved, active }: AlarmState,
  { reason, forMs }: Extract<AlarmEvent, { kind: "shelve" }>,
  { annunciates, mostShelvedMs }: LifecycleRules,
): string | undefined {
  if (!annunciates) return "it is for the record only and annunciates nothing";
  if (shelved) return `already shelved by ${shelved.by}: ${shelved.reason}`;
  if (reason.trim() === "") return "shelving needs a reason";
  if (forMs === undefined)
    return active ? undefined : "it is not active, so there is no activation to shelve; give a time";
  if (!(forMs > 0)) return "shelving needs a time";
  return forMs > mostShelvedMs ? `it may be shelved for at most ${minutes(mostShelvedMs)} at a time` : undefined;
}

function unshelve(state: AlarmState | undefined, event: Remark, rules: LifecycleRules): Step {
  const { at, by, note } = event;
  if (!state?.shelved) return rejected(state, event, "it is not shelved");
  return leave(state, "shelved", { kind: "unshelved", at, by, ...noteOf(note) }, rules);
}

function takeOutOfService(
  state: AlarmState,
  event: Extract<AlarmEvent, { kind: "take out of service" }>,
  rules: LifecycleRules,
): Step {
  const { at, by, reason, until } = event;
  const held = state.outOfService;
  if (!rules.annunciates) return rejected(state, event, "it is for the record only and annunciates nothing");
  if (held) return rejected(state, event, `already taken out of service by ${held.by}: ${held.reason}`);
  if (reason.trim() === "") return rejected(state, event, "taking it out of service needs a reason");
  if (until !== undefined && until <= at) return rejected(state, event, "the time of its return has passed already");
  const outOfService = { at, by, reason: reason.trim(), ...(until === undefined ? {} : { until }) };
  const { at: _, ...rest } = outOfService;
  return [setAside(state, { outOfService }), [{ kind: "taken out of service", at, ...rest }]];
}

function returnToService(state: AlarmState | undefined, event: Remark, rules: LifecycleRules): Step {
  const { at, by, note } = event;
  if (!state?.outOfService) return rejected(state, event, "it is not out of service");
  return leave(state, "outOfService", { kind: "returned to service", at, by, ...noteOf(note) }, rules);
}

function suppress(before: AlarmState, { at, state }: Extract<AlarmEvent, { kind: "suppress" }>): Step {
  if (before.suppressed?.until === undefined && before.suppressed?.state === state) return [before, []];
  const suppressed = { state, since: before.suppressed?.since ?? at };
  // From one such state into another, or back into it before the suppression had ended: it goes on.
  if (before.suppressed) return [{ ...before, suppressed }, []];
  return [setAside(before, { suppressed }), [{ kind: "suppressed", at, state }]];
}

function processTime(state: AlarmState | undefined, at: number, rules: LifecycleRules): Step {
  const { until, state: word } = state?.suppressed ?? {};
  if (!state || until === undefined || word === undefined || at < until) return [state, []];
  return leave(state, "suppressed", { kind: "suppression ended", at, state: word }, rules);
}

function wallClock(state: AlarmState | undefined, at: number, rules: LifecycleRules): Step {
  let next = state;
  const records: AlarmRecord[] = [];
  const step = ([after, more]: Step) => {
    next = after;
    records.push(...more);
  };
  const shelfWhy = next?.shelved && timeUp(next.shelved, at);
  if (next && shelfWhy) step(leave(next, "shelved", { kind: "unshelved", at, why: shelfWhy }, rules));
  const serviceWhy = next?.outOfService && timeUp(next.outOfService, at);
  if (next && serviceWhy) {
    step(leave(next, "outOfService", { kind: "returned to service", at, why: serviceWhy }, rules));
  }
  const { remindAfterMs } = rules;
  if (remindAfterMs !== undefined && next?.standing === "acknowledged" && rules.annunciates) {
    const due = (next.acknowledgedAt ?? Number.NEGATIVE_INFINITY) + remindAfterMs;
    if (at >= due) step([annunciated(next, rules), [anew(next, at)]]); // C → B
  }
  return [next, records];
}

/** Never hidden by accident: with a clock that was set back nobody knows how long it has been. */
function timeUp({ at: since, until }: { at: number; until?: number }, at: number): string | undefined {
  if (until === undefined) return undefined;
  if (at >= until) return "its time has run out";
  return at < since - clockSlackMs ? "the clock was set back to before it began" : undefined;
}

/** A–F → G, H or I. What stood there is taken up anew on return, so its standing ends here. */
function setAside(state: AlarmState, held: Pick<AlarmState, "shelved" | "suppressed" | "outOfService">): AlarmState {
  const { clearedAt: _, acknowledgedAt: __, acknowledgedBy: ___, ...rest } = state;
  const aside: AlarmState = { ...rest, ...held, standing: "normal", times: 0 };
  return state.active ? aside : withoutActivation(aside);
}

/** One of G, H, I ends. When it was the last, the alarm is normal again or, if its condition holds, annunciated anew: never slipped in as seen. */
function leave(
  state: AlarmState,
  held: "shelved" | "suppressed" | "outOfService",
  record: AlarmRecord,
  rules: LifecycleRules,
): Step {
  const { [held]: _, ...next } = state;
  if (isSetAside(next)) return [next, [record]];
  if (!next.active) return [undefined, [record]];
  return [annunciated(next, rules), [record, anew(next, record.at)]];
}

function anew(state: AlarmState, at: number): AlarmRecord {
  return { kind: "annunciated anew", at, says: state.activation?.says ?? "" };
}

function withoutActivation({ activation: _, ...rest }: AlarmState): AlarmState {
  return rest;
}

/** The state stays as it was; `resting` stands for none. */
function rejected(state: AlarmState | undefined, event: AlarmCommand, why: string): Step {
  const { kind: command, at, by } = event;
  return [state === resting ? undefined : state, [{ kind: "rejected", at, by, command, why }]];
}

function setAsideWhy(state: AlarmState | undefined): string | undefined {
  return isSetAside(state) ? `it is ${stateWord(state)} and annunciates nothing` : undefined;
}

function noteOf(note: string | undefined): { note?: string } {
  return note === undefined || note === "" ? {} : { note };
}

function minutes(ms: number): string {
  return `${Math.round(ms / 60_000)} minutes`;
}
