import {
  adopt,
  hearProcessState,
  type Judgement,
  judge,
  type Note,
  openAlarms,
  openExcursions,
  type StreamRules,
  type StreamState,
  setAsideAlarms,
  tick,
  withEarlierPairs,
} from "../../core/judging/index.ts";
import { decideLimits, type KeptLimits, type LimitAsk, type LimitSet } from "../../core/limit-set/index.ts";
import type {
  Excursion,
  Judged,
  LabIdentity,
  LabResult,
  LabRow,
  Reading,
  RecordedEvent,
  StreamNow,
} from "../../core/messages/index.ts";
import type { Changes, NewReading, NewRefusal } from "../store/store.ts";
import { decodeReading } from "./decode.ts";
import { decodeLab, type LabEntry } from "./decode-lab.ts";
import { decodeProcessState } from "./decode-process-state.ts";
import { answerHandover, type HandoverCommand, type HandoverContext } from "./handover-command.ts";
import {
  carryOutLab,
  enterResults,
  type LabCarried,
  type LabCommand,
  type LabRecord,
  type NearReading,
} from "./laboratory.ts";
import type { Message } from "./source.ts";
import { carryOut, type StreamCommand } from "./stream-command.ts";
import type { EngineStream } from "./streams.ts";
import type { Topics } from "./topics.ts";

/** What a person or a program asks of the engine. */
export type Command =
  | StreamCommand
  | LimitCommand
  | HandoverCommand
  | LabCommand
  | KeepCommand
  /** something for the record that touches no stream: a sign-in, say */
  | { kind: "record"; event: string; says: string; by?: string };
/** `rows`: of what was to be entered, what became of each */
export type CommandOutcome =
  | { done: true; version?: number; proposal?: number; entry?: number; rows?: LabRow[] }
  | { done: false; says: string; rows?: LabRow[] };

/** Limits under consideration, kept under a name or dropped again. */
export type KeepCommand =
  | { kind: "keep limits"; stream: string; by: string; kept: Omit<KeptLimits, "stream" | "author" | "time"> }
  | { kind: "drop kept limits"; stream: string; by: string; name: string };

type Untimed<Ask> = Ask extends LimitAsk ? Omit<Ask, "at"> & { stream: string } : never;
/** What an engineer asks of a stream's limits. */
export type LimitCommand = Untimed<LimitAsk>;

export type Input =
  | { kind: "message"; message: Message }
  | { kind: "tick"; now: number; listeningSince: number }
  | { kind: "command"; id: number; now: number; command: Command }
  | { kind: "history"; load: Load; readings: Reading[]; results: HistoricLab[] }
  | { kind: "history ends"; load: Load; now: number };

/** A laboratory result of recorded history, with the process time at which it came in. */
export interface HistoricLab {
  entry: LabEntry;
  receivedAt: number;
}

/** stands for the topic of what a load brought */
export const loadTopic = "load";

/** Recorded history of one stream on its way in: judged with a state of its own, beside the live one. */
export interface Load {
  stream: string;
  rules: StreamRules;
  state: StreamState;
  /** readings from here on are the live record's: they are left out, and counted */
  until: number;
  counts: { recorded: number; repeated: number; refused: number };
}

/** What one turn of the engine comes to: everything to commit, and everything to say once it is committed. */
export interface Turn {
  changes: Changes;
  streams: Map<string, EngineStream>;
  loads: Map<string, Load>;
  cursor: number;
  judged: Judged[];
  /** streams whose picture has changed */
  touched: Set<string>;
  replies: { id: number; outcome: CommandOutcome }[];
  repeats: number;
}

export interface Context {
  topics: Topics;
  /** does a change of limits need another person's approval? */
  approval: boolean;
  /** is this identity on record already? (not counting this turn) */
  isRecorded: (stream: string, time: number, sequence: number) => boolean;
  /** an excursion on record (not counting this turn) */
  excursion: (id: string) => Excursion | undefined;
  handover: HandoverContext;
  /** readings of `from` ≤ time ≤ `to` and laboratory results on record (not counting this turn) */
  readingsBetween: (stream: string, from: number, to: number) => NearReading[];
  labResult: (stream: string, identity: LabIdentity) => LabResult | undefined;
}

/** All inputs of one turn through judging, in their order. Changes nothing outside: the caller commits, then takes over what is returned. */
export function takeTurn(
  inputs: readonly Input[],
  before: { streams: ReadonlyMap<string, EngineStream>; cursor: number },
  context: Context,
): Turn {
  const turn = new TurnBuilder(before, context);
  for (const input of inputs) turn.take(input);
  return turn.finish();
}

class TurnBuilder {
  readonly #streams: Map<string, EngineStream>;
  readonly #context: Context;
  readonly #readings: NewReading[] = [];
  readonly #refusals: NewRefusal[] = [];
  readonly #events: RecordedEvent[] = [];
  readonly #excursions: Excursion[] = [];
  readonly #judged: Judged[] = [];
  readonly #changed = new Set<string>();
  readonly #loads = new Map<string, Load>();
  readonly #limitSets: LimitSet[] = [];
  readonly #shiftRecords: NonNullable<Changes["shiftRecords"]> = [];
  readonly #labResults: LabResult[] = [];
  readonly #keptLimits: NonNullable<Changes["keptLimits"]> = [];
  readonly #replies: Turn["replies"] = [];
  /** identities within this turn: the store does not know them yet */
  readonly #seen = new Set<string>();
  #cursor: number;
  #repeats = 0;

  constructor(before: { streams: ReadonlyMap<string, EngineStream>; cursor: number }, context: Context) {
    this.#streams = new Map(before.streams);
    this.#cursor = before.cursor;
    this.#context = context;
  }

  take(input: Input): void {
    switch (input.kind) {
      case "message":
        this.#message(input.message);
        break;
      case "tick":
        this.#tick(input.now, input.listeningSince);
        break;
      case "command":
        this.#command(input.id, input.now, input.command);
        break;
      case "history":
        this.#history(input.load, input.readings, input.results);
        break;
      case "history ends":
        this.#historyEnds(input.load);
        break;
      default:
        input satisfies never;
    }
  }

  finish(): Turn {
    const states = new Map([...this.#changed].map((id) => [id, this.#streams.get(id)!.state]));
    return {
      changes: {
        readings: this.#readings,
        refusals: this.#refusals,
        events: this.#events,
        excursions: this.#excursions,
        limitSets: this.#limitSets,
        shiftRecords: this.#shiftRecords,
        labResults: this.#labResults,
        keptLimits: this.#keptLimits,
        states,
      },
      streams: this.#streams,
      loads: this.#loads,
      cursor: this.#cursor,
      judged: this.#judged,
      touched: this.#changed,
      replies: this.#replies,
      repeats: this.#repeats,
    };
  }

  #message({ topic, payload, receivedAt }: Message): void {
    const { stream: named, what } = this.#context.topics.read(topic) ?? {};
    const stream = named === undefined ? undefined : this.#streams.get(named);
    const refuse = (reason: string, says: string) => {
      this.#refusals.push({ stream: stream ? named! : null, topic, receivedAt, reason, says, payload });
      if (stream) this.#changed.add(named!);
    };
    if (!stream) {
      const known = [...this.#streams.keys()].join(", ");
      refuse("unknown stream", `topic ${topic.slice(0, 200)} names no stream of this plant; it has ${known}`);
      return;
    }
    if (what === "state") {
      this.#processState(named!, stream, { payload, receivedAt }, refuse);
      return;
    }
    if (what === "lab") {
      this.#labMessage(stream, { payload, receivedAt }, refuse);
      return;
    }
    const decoded = decodeReading(payload);
    if (decoded.kind === "refused") {
      refuse(decoded.reason, decoded.says);
      return;
    }
    const { reading } = decoded;
    const [next, judgement] = judge(
      stream.state,
      { reading, receivedAt, known: this.#isKnown(named!, reading, stream.state) },
      stream.rules,
    );
    if (judgement.kind === "repeat") {
      this.#repeats++;
      return;
    }
    if (judgement.kind === "refused") {
      refuse(judgement.reason, judgement.says);
      return;
    }
    this.#streams.set(named!, { ...stream, state: next });
    this.#changed.add(named!);
    this.#record(reading, receivedAt, judgement, false);
    if (judgement.refusal) refuse(judgement.refusal.reason, judgement.refusal.says);
    this.#judged.push(judgement.judged);
  }

  #processState(
    id: string,
    stream: EngineStream,
    { payload, receivedAt }: Pick<Message, "payload" | "receivedAt">,
    refuse: (reason: string, says: string) => void,
  ): void {
    const decoded = decodeProcessState(payload);
    if (decoded.kind === "refused") {
      refuse("malformed", decoded.says);
      return;
    }
    const [state, heard] = hearProcessState(stream.state, decoded.state, receivedAt, stream.rules);
    switch (heard.kind) {
      case "repeat":
        this.#repeats++;
        return;
      case "refused":
        refuse(heard.reason, `process state: ${heard.says}`);
        return;
      case "heard":
        this.#streams.set(id, { ...stream, state });
        this.#changed.add(id);
        this.#note(heard.notes, false);
        return;
      default:
        heard satisfies never;
    }
  }

  #labMessage(
    stream: EngineStream,
    { payload, receivedAt }: Pick<Message, "payload" | "receivedAt">,
    refuse: (reason: string, says: string) => void,
  ): void {
    const decoded = decodeLab(payload);
    if (decoded.kind === "refused") {
      refuse("malformed", `lab result: ${decoded.says}`);
      return;
    }
    const { entry } = decoded;
    const about = { origin: "message" as const, by: entry.by ?? "the laboratory", at: receivedAt };
    const carried = enterResults(stream, [{ row: 1, entry }], about, this.#labRecord(stream.rules.stream));
    const [row] = carried.rows!;
    if (row.outcome === "refused") refuse("lab result", `lab result: ${row.says}`);
    else if (row.outcome === "already there") this.#repeats++;
    else this.#takeLab(stream, carried);
  }

  /** What a load brings of the laboratory, between its readings. */
  #labHistory(load: Load, state: StreamState, { entry, receivedAt }: HistoricLab): StreamState {
    const about = { origin: "history" as const, by: entry.by ?? "the laboratory", at: receivedAt };
    const stream = { rules: load.rules, state };
    const carried = enterResults(stream, [{ row: 1, entry }], about, this.#labRecord(load.stream));
    const [row] = carried.rows!;
    if (row.outcome === "refused") {
      const payload = Buffer.from(JSON.stringify(entry));
      const says = `lab result: ${row.says}`;
      this.#refusals.push({ stream: load.stream, topic: loadTopic, receivedAt, reason: "lab result", says, payload });
    }
    this.#labResults.push(...carried.results);
    this.#note(carried.notes, true);
    return carried.state;
  }

  #takeLab({ rules }: EngineStream, { state, results, notes }: LabCarried): void {
    this.#streams.set(rules.stream, { rules, state });
    this.#changed.add(rules.stream);
    this.#labResults.push(...results);
    this.#note(notes, false);
  }

  /** The record of a stream as it will be with this turn. */
  #labRecord(stream: string): LabRecord {
    const isOurs = (result: LabResult, identity: LabIdentity) =>
      result.stream === stream &&
      result.property === identity.property &&
      result.time === identity.time &&
      result.method === identity.method &&
      result.sample === identity.sample;
    return {
      readings: (from, to) => {
        const fresh = this.#readings.filter(
          ({ judged }) => judged.stream === stream && judged.time >= from && judged.time <= to,
        );
        return [...this.#context.readingsBetween(stream, from, to), ...fresh].sort(
          (a, b) => a.judged.time - b.judged.time,
        );
      },
      known: (identity) =>
        this.#labResults.findLast((result) => isOurs(result, identity)) ?? this.#context.labResult(stream, identity),
    };
  }

  #history(load: Load, readings: readonly Reading[], results: readonly HistoricLab[]): void {
    const { rules, counts } = this.#loadNow(load);
    let { state } = this.#loadNow(load);
    const refuse = (reading: Reading, reason: string, says: string) => {
      const payload = Buffer.from(`time ${reading.time}, sequence ${reading.sequence}`);
      this.#refusals.push({ stream: load.stream, topic: loadTopic, receivedAt: reading.time, reason, says, payload });
    };
    const waiting = results.filter(({ entry }) => entry.time < load.until);
    const hearUntil = (time: number) => {
      while (waiting.length > 0 && waiting[0].receivedAt <= time)
        state = this.#labHistory(load, state, waiting.shift()!);
    };
    for (const reading of readings) {
      hearUntil(reading.time);
      if (reading.time >= load.until) {
        counts.repeated++; // the live record begins here: what follows is on record, or will be
        continue;
      }
      const receivedAt = reading.time;
      const [silent, silentNotes, silentExcursions] = tick(state, receivedAt, state.receivedAt ?? receivedAt, rules);
      this.#note(silentNotes, true);
      this.#excursions.push(...silentExcursions);
      const known = this.#isKnown(load.stream, reading, undefined);
      const [next, judgement] = judge(silent, { reading, receivedAt, known }, rules);
      state = unattended(next);
      if (judgement.kind === "repeat") counts.repeated++;
      else if (judgement.kind === "refused") {
        counts.refused++;
        refuse(reading, judgement.reason, judgement.says);
      } else {
        counts.recorded++;
        this.#record(reading, receivedAt, judgement, true);
        if (judgement.refusal) refuse(reading, judgement.refusal.reason, judgement.refusal.says);
      }
    }
    hearUntil(Number.POSITIVE_INFINITY); // what is left came after the portion's last reading
    this.#loads.set(load.stream, { ...load, state, counts });
  }

  /** Where the history ends nothing is left open: nobody can acknowledge, and what came after is for the live record to say. */
  #historyEnds(load: Load): void {
    const { state, rules } = this.#loadNow(load);
    for (const excursion of openExcursions(state, rules)) {
      this.#excursions.push({ ...excursion, end: state.latest?.time ?? excursion.start, ended: "gap" });
    }
    const at = state.latest?.time ?? load.until;
    const open = openAlarms(state, rules);
    this.#note(
      open.map((alarm) => ({
        at,
        stream: load.stream,
        kind: "alarm left open by history",
        says: `${alarm.title}: the history ends here; it was ${alarm.state}.`,
        alarm,
      })),
      true,
    );
    const { recorded, repeated, refused } = load.counts;
    this.#note(
      [
        {
          at,
          stream: load.stream,
          kind: "history loaded",
          says: `${recorded} readings recorded, ${repeated} already there, ${refused} refused.`,
        },
      ],
      true,
    );
    this.#loads.delete(load.stream);
    const live = this.#streams.get(load.stream)!;
    this.#streams.set(load.stream, { ...live, state: withEarlierPairs(live.state, state) });
    this.#changed.add(load.stream);
  }

  #loadNow(load: Load): Load {
    return this.#loads.get(load.stream) ?? { ...load, counts: { ...load.counts } };
  }

  #tick(now: number, listeningSince: number): void {
    for (const [id, stream] of this.#streams) {
      const [next, notes, excursions] = tick(stream.state, now, listeningSince, stream.rules);
      if (next === stream.state) continue;
      this.#streams.set(id, { ...stream, state: next });
      this.#changed.add(id);
      this.#note(notes, false);
      this.#excursions.push(...excursions);
    }
  }

  #command(id: number, now: number, command: Command): void {
    if (command.kind === "record") {
      const { event, says, by } = command;
      this.#note([{ at: now, stream: null, kind: event, says, ...(by === undefined ? {} : { by }) }], false);
      this.#replies.push({ id, outcome: { done: true } });
      return;
    }
    if (command.kind === "handover") {
      this.#handover(id, now, command);
      return;
    }
    const stream = this.#streams.get(command.stream);
    if (!stream) {
      const says = `${command.stream} is no stream of this plant; it has ${[...this.#streams.keys()].join(", ")}`;
      this.#replies.push({ id, outcome: { done: false, says } });
      return;
    }
    if (command.kind === "keep limits" || command.kind === "drop kept limits") {
      this.#keep(id, now, command);
      return;
    }
    if (isLimitCommand(command)) {
      this.#limits(id, now, stream, command);
      return;
    }
    if (isLabCommand(command)) {
      const carried = carryOutLab(stream, command, now, this.#labRecord(command.stream));
      this.#takeLab(stream, carried);
      const rows = carried.rows ? { rows: carried.rows } : {};
      const { rejected: says } = carried;
      this.#replies.push({
        id,
        outcome: says === undefined ? { done: true, ...rows } : { done: false, says, ...rows },
      });
      return;
    }
    const { state, notes, excursions, rejected } = carryOut(stream, command, now, (excursion) =>
      this.#excursion(excursion),
    );
    // What was rejected is on record all the same, with the reason.
    this.#note(notes, false);
    if (rejected !== undefined) {
      this.#replies.push({ id, outcome: { done: false, says: rejected } });
      return;
    }
    this.#streams.set(command.stream, { ...stream, state });
    this.#changed.add(command.stream);
    this.#excursions.push(...excursions);
    this.#replies.push({ id, outcome: { done: true } });
  }

  #handover(id: number, now: number, command: HandoverCommand): void {
    const place = { now, next: this.#cursor + 1, events: this.#events };
    const answer = answerHandover(command, place, this.#context.handover);
    if (answer.kind === "rejected") {
      this.#replies.push({ id, outcome: { done: false, says: answer.why } });
      return;
    }
    this.#note([answer.note], false);
    if (answer.frozen) this.#shiftRecords.push({ record: answer.frozen, number: answer.number });
    this.#replies.push({ id, outcome: { done: true, entry: answer.number } });
  }

  /** Limits change between two readings: what is judged from here on is judged by the new version, and says so. */
  #limits(id: number, now: number, { rules, state }: EngineStream, command: LimitCommand): void {
    const { stream } = command;
    const answer = decideLimits({ ...command, at: now } as LimitAsk, {
      inForce: rules.limitSet,
      proposals: state.proposals,
      properties: rules.scorer?.compiled.properties.map(({ name }) => name) ?? [],
      approval: this.#context.approval,
    });
    if (answer.kind === "rejected") {
      this.#replies.push({ id, outcome: { done: false, says: answer.why } });
      return;
    }
    const next = { ...state, proposals: answer.proposals };
    const note = { at: now, stream, kind: `limits ${answer.kind}`, says: answer.says, by: command.by };
    this.#changed.add(stream);
    if (answer.kind !== "in force") {
      this.#streams.set(stream, { rules, state: next });
      this.#note([note], false);
      this.#replies.push({
        id,
        outcome: { done: true, ...(answer.kind === "waits" ? { proposal: answer.proposal.id } : {}) },
      });
      return;
    }
    const ruled = { ...rules, limitSet: answer.set };
    const [adopted, notes] = adopt(next, now, ruled);
    this.#streams.set(stream, { rules: ruled, state: adopted });
    this.#limitSets.push(answer.set);
    this.#note([note, ...notes], false);
    this.#replies.push({ id, outcome: { done: true, version: answer.set.version } });
  }

  #keep(id: number, now: number, command: KeepCommand): void {
    const { stream, by } = command;
    const keeps = command.kind === "keep limits";
    const name = keeps ? command.kept.name : command.name;
    const kept = keeps ? { ...command.kept, stream, author: by, time: now } : null;
    this.#keptLimits.push({ stream, name, kept });
    const says = keeps
      ? `${by} keeps limits as "${name}"; they judge nothing.`
      : `${by} drops the limits kept as "${name}".`;
    this.#note([{ at: now, stream, kind: keeps ? "limits kept" : "limits dropped", says, by }], false);
    this.#replies.push({ id, outcome: { done: true } });
  }

  /** As it is on record, or will be with this turn. */
  #excursion(id: string): Excursion | undefined {
    return this.#excursions.findLast((excursion) => excursion.id === id) ?? this.#context.excursion(id);
  }

  #isKnown(stream: string, { time, sequence }: Reading, state: StreamState | undefined): boolean {
    const identity = `${stream} ${time} ${sequence}`;
    if (this.#seen.has(identity)) return true;
    // Newer than all that is on record: no need to ask the store.
    if (state && time > (state.latest?.time ?? Number.NEGATIVE_INFINITY)) return false;
    return this.#context.isRecorded(stream, time, sequence);
  }

  #record(
    reading: Reading,
    receivedAt: number,
    judgement: Extract<Judgement, { kind: "judged" }>,
    history: boolean,
  ): void {
    const { judged, late, gapFrom, notes, excursions } = judgement;
    const { values, axis, quality, context } = reading;
    this.#seen.add(`${judged.stream} ${judged.time} ${judged.sequence}`);
    this.#readings.push({ judged, receivedAt, late, history, gapFrom, values, axis, quality, context });
    this.#note(notes, history);
    this.#excursions.push(...excursions);
  }

  #note(notes: readonly Note[], history: boolean): void {
    for (const note of notes) {
      this.#events.push({ cursor: ++this.#cursor, ...note, ...(history ? { history: true } : {}) });
    }
  }
}

function isLabCommand(command: StreamCommand | LabCommand): command is LabCommand {
  return (
    command.kind === "enter lab results" ||
    command.kind === "correct lab result" ||
    command.kind === "withdraw lab result"
  );
}

function isLimitCommand(command: StreamCommand | LimitCommand | LabCommand): command is LimitCommand {
  return command.kind === "change limits" || command.kind === "approve limits" || command.kind === "withdraw limits";
}

/** Nobody was there to acknowledge or reset what history raised: an alarm whose condition has gone is done, and does not wait to be raised "again". */
function unattended(state: StreamState): StreamState {
  const returned = Object.values(state.alarms).some(({ active }) => !active);
  if (!returned) return state;
  return { ...state, alarms: Object.fromEntries(Object.entries(state.alarms).filter(([, { active }]) => active)) };
}

/** A stream's present picture, as the screens get it. */
export function streamNow({ rules, state }: EngineStream, refused: number): StreamNow {
  const held = state.verdict !== null && state.verdict !== "inside";
  return {
    stream: rules.stream,
    latest: state.latest,
    receivedAt: state.receivedAt,
    lastInside: state.lastInside,
    verdictSince: state.verdictSince,
    alarms: openAlarms(state, rules),
    setAside: setAsideAlarms(state, rules),
    ...(state.process ? { process: state.process } : {}),
    excursions: openExcursions(state, rules),
    refused,
    held: held && rules.limitSet.alarms.some((rule) => rule.watches.kind === "property" && rule.untrusted === "hold"),
    ...(rules.modelTrouble === undefined ? {} : { trouble: rules.modelTrouble }),
  };
}
