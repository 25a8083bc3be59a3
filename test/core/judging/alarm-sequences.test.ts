import fc from "fast-check";
import { expect, test } from "vitest";
import { type AlarmCommand, type AlarmState, isSetAside } from "../../../core/alarms/index.ts";
import {
  adopt,
  commandAlarm,
  freshState,
  hearLaboratory,
  hearProcessState,
  judge,
  type Note,
  openAlarms,
  type StreamRules,
  type StreamState,
  setAsideAlarms,
  tick,
} from "../../../core/judging/index.ts";
import type { AlarmRule } from "../../../core/limit-set/index.ts";
import type { LabResult } from "../../../core/messages/index.ts";
import { seededRandom } from "../../../core/pls/index.ts";
import { labBiasAlarm, labResult, smallRules, spectrum, unfamiliarAlarm } from "./small-stream.ts";

const full = process.env.MILLRACE_FULL === "1";
/** 100 000 sequences take some minutes of a processor by itself, and more on a busy one. */
const fullTimeoutMs = full ? 3_600_000 : 60_000;
const second = 1000;
const minute = 60 * second;
const hour = 60 * minute;
const start = Date.UTC(2026, 5, 1);

const alarm = (key: string, more: Partial<AlarmRule>) => unfamiliarAlarm({ key, title: key, ...more });
const one = { onDelay: { readings: 1 }, offDelay: { readings: 1 } };
const cleaning = { suppressedIn: ["cleaning"] };
const alarms = [
  alarm("unfamiliar", {
    onDelay: { readings: 2 },
    offDelay: { readings: 2 },
    ...cleaning,
    suppressedForMinutesAfter: 2,
  }),
  alarm("latching", { ...one, latching: true, mostShelvedMinutes: 30, suppressedIn: ["cleaning", "stopped"] }),
  alarm("range", { ...one, watches: { kind: "extrapolated", deadband: 0.05 }, remindAfterMinutes: 20 }),
  alarm("silent", { ...one, watches: { kind: "silent", periods: 6 }, suppressedIn: ["stopped"] }),
  alarm("share", { ...one, watches: { kind: "unusable share", share: 0.5, among: 4 } }),
  labBiasAlarm({ key: "bias", title: "bias", ...cleaning }),
  alarm("recorded", { ...one, priority: "record only", ...cleaning }),
];
/** The first as they are; then without one of them and another suppressed in other states; and with one that asks nobody any more. */
const ruleSets: StreamRules[] = [
  smallRules(alarms),
  smallRules(
    alarms
      .filter(({ key }) => key !== "latching")
      .map((rule) => (rule.key === "unfamiliar" ? { ...rule, suppressedIn: ["stopped"] } : rule)),
  ),
  smallRules(alarms.map((rule) => (rule.key === "range" ? { ...rule, priority: "record only" } : rule))),
];
const keys = [...alarms.map(({ key }) => key), "no-such-alarm"];

type Action =
  | { do: "reading"; what: "inside" | "foreign" | "wide" | "bad" | "same"; afterMs: number }
  | { do: "time passes"; ms: number }
  | { do: "command"; key: string; command: Distributed }
  | { do: "process"; state: string }
  | { do: "laboratory"; what: "agrees" | "above" | "below" | "apart" | "withdrawn" }
  | { do: "restart"; rules: number; downMs: number };
type WithoutStamp<C> = C extends AlarmCommand ? Omit<C, "at" | "by"> : never;
type Distributed = WithoutStamp<AlarmCommand>;

const reasons = fc.constantFrom("known", "known", " ");
const commands: fc.Arbitrary<Distributed> = fc.oneof(
  fc.record({ kind: fc.constantFrom("acknowledge", "acknowledge", "reset", "unshelve", "return to service") }),
  fc.record({
    kind: fc.constant("shelve" as const),
    reason: reasons,
    forMs: fc.constantFrom(minute, 25 * minute, 9 * hour),
  }),
  fc.record({ kind: fc.constant("shelve" as const), reason: reasons }),
  fc.record({ kind: fc.constant("take out of service" as const), reason: reasons }),
  fc.record({
    kind: fc.constant("take out of service" as const),
    reason: reasons,
    until: fc.constant(start + 2 * hour),
  }),
) as fc.Arbitrary<Distributed>;
const actions: fc.Arbitrary<Action> = fc.oneof(
  {
    weight: 6,
    arbitrary: fc.record({
      do: fc.constant("reading" as const),
      what: fc.constantFrom("inside", "inside", "foreign", "foreign", "wide", "bad", "same"),
      afterMs: fc.constantFrom(10 * second, 10 * second, 10 * second, 5 * minute),
    }),
  },
  {
    weight: 2,
    arbitrary: fc.record({
      do: fc.constant("time passes" as const),
      // The clock may be set back, too.
      ms: fc.constantFrom(second, 70 * second, 10 * minute, 31 * minute, 9 * hour, -30 * second, -2 * hour),
    }),
  },
  {
    weight: 4,
    arbitrary: fc.record({ do: fc.constant("command" as const), key: fc.constantFrom(...keys), command: commands }),
  },
  {
    weight: 1,
    arbitrary: fc.record({
      do: fc.constant("process" as const),
      state: fc.constantFrom("running", "cleaning", "stopped"),
    }),
  },
  {
    weight: 3,
    arbitrary: fc.record({
      do: fc.constant("laboratory" as const),
      what: fc.constantFrom("agrees", "above", "above", "above", "below", "apart", "withdrawn"),
    }),
  },
  {
    weight: 1,
    arbitrary: fc.record({
      do: fc.constant("restart" as const),
      rules: fc.constantFrom(0, 0, 1, 2),
      downMs: fc.constantFrom(0, minute, hour),
    }),
  },
) as fc.Arbitrary<Action>;

/** A stream with its clocks, and beside it what a person would know who read nothing but the record. */
class Plant {
  state: StreamState = freshState;
  rules = ruleSets[0];
  wall = start;
  process = start;
  #listeningSince = start;
  #sequence = 0;
  readonly #random = seededRandom(11);
  readonly #laboratoryRandom = seededRandom(12);
  readonly #results: LabResult[] = [];
  #last = spectrum(this.#random);
  /** by key: does the condition hold, and was somebody called for it since it last began to be annunciated? */
  readonly told = new Map<string, { active: boolean; called: boolean }>();

  act(action: Action): void {
    switch (action.do) {
      case "reading":
        this.#reading(action.what, action.afterMs);
        break;
      case "time passes":
        this.wall += action.ms;
        if (action.ms > 0) this.process += action.ms;
        this.#tick();
        break;
      case "command": {
        const command = { ...action.command, at: this.wall, by: "R. Quill" } as AlarmCommand;
        const { state, notes, rejected } = commandAlarm(this.state, action.key, command, this.rules);
        if (rejected !== undefined) {
          hold(state === this.state, `${command.kind} was rejected and changed something`);
          const [{ kind, by }] = notes;
          hold(
            notes.length === 1 && kind === "command rejected" && by === "R. Quill",
            "a rejection that is not on record",
          );
        }
        this.state = state;
        this.#hear(notes);
        break;
      }
      case "process": {
        const [state, heard] = hearProcessState(
          this.state,
          { state: action.state, since: this.process },
          Math.max(this.wall, this.process),
          this.rules,
        );
        this.state = state;
        if (heard.kind === "heard") this.#hear(heard.notes);
        break;
      }
      case "laboratory":
        this.#laboratory(action.what);
        break;
      case "restart": {
        this.wall += action.downMs;
        this.process += action.downMs;
        this.rules = ruleSets[action.rules];
        this.#listeningSince = this.wall;
        const [state, notes] = adopt(JSON.parse(JSON.stringify(this.state)), this.wall, this.rules);
        this.state = state;
        this.#hear(notes);
        this.#nothingOverdue();
        break;
      }
      default:
        action satisfies never;
    }
  }

  #reading(what: Extract<Action, { do: "reading" }>["what"], afterMs: number): void {
    this.process += afterMs;
    this.wall += afterMs;
    const amounts = { inside: {}, foreign: { foreign: 0.3 }, wide: { a: 2.5 }, bad: {}, same: {} }[what];
    const values = what === "same" ? this.#last : spectrum(this.#random, amounts);
    this.#last = values;
    const quality = what === "bad" ? { quality: "bad" as const } : {};
    const reading = { time: this.process, sequence: this.#sequence++, values, ...quality };
    const receivedAt = Math.max(this.wall, this.process);
    const [state, judgement] = judge(this.state, { reading, receivedAt, known: false }, this.rules);
    if (judgement.kind !== "judged") throw new Error(JSON.stringify(judgement));
    this.state = state;
    this.#hear(judgement.notes);
  }

  #laboratory(what: Extract<Action, { do: "laboratory" }>["what"]): void {
    const last = this.#results.at(-1);
    const withdrawn = what === "withdrawn";
    if (withdrawn && !last) return;
    const value =
      { agrees: 0.5, above: 0.3, below: 0.7, apart: 0.3, withdrawn: 0 }[what] + 0.002 * this.#laboratoryRandom();
    const entered = labResult(this.process + this.#results.length, value);
    const apart = what === "apart" ? { pair: { ...entered.pair, apart: "not inside" as const } } : {};
    const result = withdrawn ? { ...last!, version: last!.version + 1, withdrawn } : { ...entered, ...apart };
    if (withdrawn) this.#results.pop();
    else this.#results.push(result);
    const [state, notes] = hearLaboratory(this.state, result, this.rules);
    this.state = state;
    this.#hear(notes);
  }

  #tick(): void {
    const [state, notes] = tick(this.state, this.wall, this.#listeningSince, this.rules);
    this.state = state;
    this.#hear(notes);
    const [again, nothing] = tick(state, this.wall, this.#listeningSince, this.rules);
    hold(again === state && nothing.length === 0, "the same moment twice came to something");
    this.#nothingOverdue();
  }

  #nothingOverdue(): void {
    for (const [key, { shelved, outOfService }] of Object.entries(this.state.alarms)) {
      for (const until of [shelved?.until, outOfService?.until]) {
        hold(until === undefined || until > this.wall, `${key} is set aside beyond its time`);
      }
    }
  }

  #hear(notes: readonly Note[]): void {
    for (const note of notes) {
      const key = note.alarm?.key ?? note.setAside?.key ?? note.key;
      if (key === undefined) continue;
      const now = this.told.get(key) ?? { active: false, called: false };
      const silently = note.alarm?.priority === "record only" ? { called: false } : {};
      this.told.set(key, { ...now, ...retold(note.kind), ...silently });
    }
  }
}

/** What an entry of the record tells of an alarm. */
function retold(kind: string): Partial<{ active: boolean; called: boolean }> {
  switch (kind) {
    case "alarm raised":
    case "alarm raised again":
      return { active: true, called: true };
    case "alarm annunciated anew":
      return { called: true };
    case "alarm raised unannounced":
      return { active: true, called: false };
    case "alarm cleared":
    case "alarm cleared unannounced":
    case "alarm removed":
      return { active: false, called: false };
    case "alarm shelved":
    case "alarm taken out of service":
    case "alarm suppressed":
      return { called: false };
    default:
      return {};
  }
}

/** A–F and G, H, I as they may be, and nothing else. */
function illegal(rule: AlarmRule, state: AlarmState): string | undefined {
  const { active, standing, activation, shelved } = state;
  const asked = standing !== "normal" && standing !== "acknowledged";
  if (shelved && shelved.until - shelved.at > (rule.mostShelvedMinutes ?? 480) * minute) return "shelved for too long";
  if (active && !activation) return "active, and nobody knows why";
  if (rule.priority === "record only" && asked) return "asks somebody, though for the record only";
  if (isSetAside(state)) return standing === "normal" ? undefined : `set aside, and stands ${standing}`;
  if (standing === "normal") return "normal, and kept";
  if (active !== (standing === "unacknowledged" || standing === "acknowledged")) return `active ${active}, ${standing}`;
  return standing.startsWith("latched") && !rule.latching ? `${standing}, but the rule does not latch` : undefined;
}

function check({ state, rules, told }: Plant): void {
  const ofRules = rules.limitSet.alarms;
  for (const key of Object.keys(state.alarms))
    hold(
      ofRules.some((rule) => rule.key === key),
      `${key} is an orphan`,
    );
  const open = new Set(openAlarms(state, rules).map(({ key }) => key));
  const aside = new Set(setAsideAlarms(state, rules).map(({ key }) => key));
  for (const rule of ofRules) {
    const { key, priority } = rule;
    const alarm = state.alarms[key];
    const knows = told.get(key) ?? { active: false, called: false };
    const wrong = alarm && illegal(rule, alarm);
    hold(wrong === undefined, `${key}: ${wrong}`);
    const active = alarm?.active ?? false;
    hold((state.detectors[key]?.active ?? false) === active, `${key}: the detector does not say active ${active}`);
    hold(knows.active === active, `${key}: the record does not say active ${active}`);
    // Not lost: an alarm that holds and is not set aside has called somebody, and is in the list.
    hold(
      !active || isSetAside(alarm) || knows.called || priority === "record only",
      `${key} holds, and nobody was called`,
    );
    const inState = state.process !== null && (rule.suppressedIn ?? []).includes(state.process.state);
    const { suppressed } = alarm ?? {};
    hold(inState === (suppressed !== undefined && suppressed.until === undefined), `${key}: suppressed or not?`);
    if (priority === "record only") continue;
    hold(open.has(key) === (alarm !== undefined && !isSetAside(alarm)), `${key}: open or not?`);
    hold(aside.has(key) === isSetAside(alarm), `${key}: set aside or not?`);
  }
}

/** An `expect` for a million looks. */
function hold(holds: boolean, otherwise: string): void {
  if (!holds) throw new Error(otherwise);
}

/** The plant runs well again, everything is returned, seen and reset: nothing may be left; and the next trouble calls somebody. */
function settle(plant: Plant): void {
  plant.act({ do: "restart", rules: 0, downMs: 0 });
  plant.act({ do: "process", state: "running" });
  plant.wall = Math.max(plant.wall, plant.process, start) + 3 * hour; // a clock that was set back is right again
  plant.process = plant.wall;
  plant.act({ do: "time passes", ms: 9 * hour });
  for (let i = 0; i < 6; i++) plant.act({ do: "reading", what: "inside", afterMs: 10 * second });
  for (let i = 0; i < 4; i++) plant.act({ do: "laboratory", what: "agrees" });
  const each = (command: Distributed) => {
    for (const { key } of alarms) plant.act({ do: "command", key, command });
  };
  each({ kind: "return to service" });
  each({ kind: "acknowledge" });
  each({ kind: "reset" });
  check(plant);
  expect(plant.state.alarms).toEqual({});
  for (let i = 0; i < 2; i++) plant.act({ do: "reading", what: "foreign", afterMs: 10 * second });
  for (let i = 0; i < 3; i++) plant.act({ do: "laboratory", what: "above" });
  expect(openAlarms(plant.state, plant.rules).map(({ key, state }) => `${key} ${state}`)).toEqual(
    expect.arrayContaining(["unfamiliar unacknowledged", "latching unacknowledged", "bias unacknowledged"]),
  );
}

test(
  "no sequence of readings, commands, restarts and clock steps loses an alarm, leaves an orphan or gives an illegal state",
  () => {
    const runs = full ? 100_000 : 2000;
    const seen = new Set<string>();
    fc.assert(
      fc.property(fc.array(actions, { maxLength: 40, size: "max" }), (sequence) => {
        const plant = new Plant();
        for (const action of sequence) {
          plant.act(action);
          check(plant);
          for (const { standing, shelved, suppressed, outOfService } of Object.values(plant.state.alarms)) {
            seen.add([standing, shelved && "G", suppressed && "H", outOfService && "I"].filter(Boolean).join(" "));
          }
        }
        settle(plant);
      }),
      { numRuns: runs, ...(full ? {} : { seed: 20261201 }) },
    );
    // The sequences come everywhere: all standings, and G, H and I alone and together.
    expect([...seen].sort()).toEqual([
      "acknowledged",
      "latched acknowledged",
      "latched unacknowledged",
      "normal G",
      "normal G H",
      "normal G H I",
      "normal G I",
      "normal H",
      "normal H I",
      "normal I",
      "returned unacknowledged",
      "unacknowledged",
    ]);
  },
  fullTimeoutMs,
);
