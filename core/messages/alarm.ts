import { type Static, Type } from "typebox";
import { HandoverEntrySchema } from "./handover-entry.ts";
import { ProcessStateSchema } from "./process-state.ts";
import { AxisUnitSchema } from "./reading.ts";

export const priorities = ["high", "medium", "low", "record only"] as const;
export const PrioritySchema = Type.Enum(priorities);
export type Priority = (typeof priorities)[number];

/** The states of IEC 62682 / ISA-18.2 that an alarm can show (A–F, then G, H and I). */
export const alarmStates = [
  "normal",
  "unacknowledged",
  "acknowledged",
  "returned unacknowledged",
  "latched unacknowledged",
  "latched acknowledged",
  "shelved",
  "suppressed",
  "out of service",
] as const;
export const AlarmStateWordSchema = Type.Enum(alarmStates);
export type AlarmStateWord = (typeof alarmStates)[number];

/** An alarm that needs a person: annunciated, in any state but normal. */
export const OpenAlarmSchema = Type.Object({
  stream: Type.String(),
  key: Type.String(),
  title: Type.String(),
  priority: PrioritySchema,
  state: AlarmStateWordSchema,
  /** when the condition began to hold without a break, process time, epoch ms */
  since: Type.Number(),
  /** when it was annunciated, process time, epoch ms */
  raisedAt: Type.Number(),
  clearedAt: Type.Optional(Type.Number()),
  acknowledgedAt: Type.Optional(Type.Number()),
  acknowledgedBy: Type.Optional(Type.String()),
  /** the evidence in words: "Q 3.4 × limit", "1 724–1 768 nm gives 81 % of Q …" */
  says: Type.String(),
  cause: Type.String(),
  consequence: Type.String(),
  response: Type.String(),
  timeToRespondMinutes: Type.Number(),
  limitSet: Type.Integer(),
  /** how often it was annunciated since anybody acknowledged it; absent: once */
  times: Type.Optional(Type.Integer()),
  /** it waits for a reset when its condition has gone */
  latching: Type.Optional(Type.Boolean()),
});
export type OpenAlarm = Static<typeof OpenAlarmSchema>;

/** Put aside by a person for a while: comes back by itself at `until`. */
export const ShelvingSchema = Type.Object({
  /** wall clock, epoch ms */
  at: Type.Number(),
  until: Type.Number(),
  /** ends with the present activation, if that comes first */
  once: Type.Optional(Type.Boolean()),
  by: Type.String(),
  reason: Type.String(),
});
export type Shelving = Static<typeof ShelvingSchema>;

/** Suppressed by design: the process is in a state in which the alarm means nothing. */
export const SuppressionSchema = Type.Object({
  /** the process state that brought it about */
  state: Type.String(),
  /** process time, epoch ms */
  since: Type.Number(),
  /** the process has left that state; the suppression ends at this process time */
  until: Type.Optional(Type.Number()),
});
export type Suppression = Static<typeof SuppressionSchema>;

/** Taken out of service by an authorised person, until one returns it (or until the time that was set). */
export const OutOfServiceSchema = Type.Object({
  /** wall clock, epoch ms */
  at: Type.Number(),
  until: Type.Optional(Type.Number()),
  by: Type.String(),
  reason: Type.String(),
});
export type OutOfService = Static<typeof OutOfServiceSchema>;

/** An alarm that annunciates nothing at present: shelved, suppressed by design, out of service, or several of these. It is evaluated all the same. */
export const SetAsideAlarmSchema = Type.Object({
  stream: Type.String(),
  key: Type.String(),
  title: Type.String(),
  priority: PrioritySchema,
  /** "out of service", "suppressed" or "shelved": the first of these that holds */
  state: AlarmStateWordSchema,
  /** does its condition hold all the same? Then since when, and with what evidence */
  active: Type.Boolean(),
  since: Type.Optional(Type.Number()),
  says: Type.Optional(Type.String()),
  shelved: Type.Optional(ShelvingSchema),
  suppressed: Type.Optional(SuppressionSchema),
  outOfService: Type.Optional(OutOfServiceSchema),
  cause: Type.String(),
  consequence: Type.String(),
  response: Type.String(),
  timeToRespondMinutes: Type.Number(),
});
export type SetAsideAlarm = Static<typeof SetAsideAlarmSchema>;

/** What an excursion was, in the words of whoever knows. Labels are the truth that limits are measured by. */
export const excursionLabels = ["process change", "analyzer fault", "cleaning", "false", "unknown"] as const;
export const ExcursionLabelSchema = Type.Enum(excursionLabels);
export type ExcursionLabel = (typeof excursionLabels)[number];

/** A part of the axis and its share of a statistic. */
export const RegionSchema = Type.Object({
  from: Type.Number(),
  to: Type.Number(),
  unit: AxisUnitSchema,
  /** share of the statistic, 0–1 (of the sum of absolute contributions where they have signs) */
  share: Type.Number(),
  /** +1: more absorption than the model can explain; −1: less */
  sign: Type.Number(),
});
export type Region = Static<typeof RegionSchema>;

export const ExcursionSchema = Type.Object({
  /** stream/kind/start: the same history always gives the same id */
  id: Type.String(),
  stream: Type.String(),
  /** what stayed beyond its limit: "unfamiliar", "extrapolated", "sparse", or a property alarm's key */
  kind: Type.String(),
  start: Type.Number(),
  /** last reading beyond the limit; absent while it is open */
  end: Type.Optional(Type.Number()),
  /** how it ended: back to normal, or a gap in the data (nobody knows what happened in it) */
  ended: Type.Optional(Type.Union([Type.Literal("returned"), Type.Literal("gap")])),
  /** the furthest it went, and when: a ratio ("× limit") for a statistic, the value itself for a property */
  peak: Type.Number(),
  peakTime: Type.Number(),
  mean: Type.Number(),
  /** unit of peak and mean: "× limit", or the property's */
  unit: Type.String(),
  readings: Type.Integer(),
  /** the wavelengths that made it, in words */
  says: Type.String(),
  /** where on the axis it differs, over all its readings together, largest share first */
  regions: Type.Optional(Type.Array(RegionSchema)),
  /** alarms that stood for it during it */
  alarms: Type.Optional(Type.Array(Type.Object({ key: Type.String(), raisedAt: Type.Number() }))),
  label: Type.Optional(
    Type.Object({ is: ExcursionLabelSchema, by: Type.String(), /** wall clock, epoch ms */ at: Type.Number() }),
  ),
  notes: Type.Optional(
    Type.Array(Type.Object({ says: Type.String(), by: Type.String(), /** wall clock, epoch ms */ at: Type.Number() })),
  ),
});
export type Excursion = Static<typeof ExcursionSchema>;

/** One entry of the record: what happened to an alarm or an excursion, or to the service itself. Cursors rise without a gap. */
export const RecordedEventSchema = Type.Object({
  cursor: Type.Integer(),
  /** process time for alarms and excursions, wall clock for the service, epoch ms */
  at: Type.Number(),
  stream: Type.Union([Type.String(), Type.Null()]),
  kind: Type.String(),
  says: Type.String(),
  by: Type.Optional(Type.String()),
  alarm: Type.Optional(OpenAlarmSchema),
  /** the alarm's key, where the alarm itself is no more */
  key: Type.Optional(Type.String()),
  /** for what happened to an alarm that annunciates nothing */
  setAside: Type.Optional(SetAsideAlarmSchema),
  excursion: Type.Optional(ExcursionSchema),
  /** for what a person wrote to the record of a shift */
  handover: Type.Optional(HandoverEntrySchema),
  /** what the plant said of the line, where it did */
  process: Type.Optional(ProcessStateSchema),
  /** true for what the recorded history brought in: it never annunciates */
  history: Type.Optional(Type.Boolean()),
});
export type RecordedEvent = Static<typeof RecordedEventSchema>;
