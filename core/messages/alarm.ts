import { type Static, Type } from "typebox";

export const priorities = ["high", "medium", "low", "record only"] as const;
export const PrioritySchema = Type.Enum(priorities);
export type Priority = (typeof priorities)[number];

/** The states of IEC 62682 / ISA-18.2 that an alarm can show. */
export const alarmStates = ["normal", "unacknowledged", "acknowledged", "returned unacknowledged"] as const;
export const AlarmStateWordSchema = Type.Enum(alarmStates);
export type AlarmStateWord = (typeof alarmStates)[number];

/** An alarm that needs a person: in any state but normal. */
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
});
export type OpenAlarm = Static<typeof OpenAlarmSchema>;

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
  excursion: Type.Optional(ExcursionSchema),
  /** true for what the recorded history brought in: it never annunciates */
  history: Type.Optional(Type.Boolean()),
});
export type RecordedEvent = Static<typeof RecordedEventSchema>;
