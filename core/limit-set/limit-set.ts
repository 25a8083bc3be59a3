import { type Static, Type } from "typebox";
import { PrioritySchema, ProcessStateWordSchema, RehearsalEvidenceSchema } from "../messages/index.ts";

/** One statistic's limit: the number in force, and where it came from. The number rules; method and confidence say how to make it again. */
export const StatisticLimitSchema = Type.Object({
  method: Type.String({ minLength: 1 }),
  /** which residuals a limit of Q rests on */
  residuals: Type.Optional(Type.String()),
  confidence: Type.Optional(Type.Number({ exclusiveMinimum: 0, exclusiveMaximum: 1 })),
  limit: Type.Number({ exclusiveMinimum: 0 }),
});
export type StatisticLimit = Static<typeof StatisticLimitSchema>;

/**
 * How many readings make up somebody's mind: the condition holds in `readings` of the last `of` readings (the same number for "in a row"),
 * and has held for at least `seconds` of process time.
 */
export const DelaySchema = Type.Object({
  readings: Type.Integer({ minimum: 1, maximum: 1000 }),
  of: Type.Optional(Type.Integer({ minimum: 1, maximum: 1000 })),
  seconds: Type.Optional(Type.Number({ minimum: 0 })),
});
export type Delay = Static<typeof DelaySchema>;

export const sides = ["high-high", "high", "low", "low-low"] as const;
export type Side = (typeof sides)[number];

const PropertyWatchSchema = Type.Object({
  kind: Type.Literal("property"),
  property: Type.String(),
  side: Type.Enum(sides),
  limit: Type.Number(),
  /** unit of the property: how far it must come back from the limit before the alarm clears */
  deadband: Type.Number({ minimum: 0 }),
});
const StatisticWatchSchema = Type.Object({
  kind: Type.Union([Type.Literal("extrapolated"), Type.Literal("unfamiliar"), Type.Literal("sparse")]),
  /** share of the limit: the ratio must fall below 1 − deadband before the alarm clears */
  deadband: Type.Number({ minimum: 0, exclusiveMaximum: 1 }),
});
/** What is remembered of the last readings is written with every commit: a hundred is plenty. */
export const mostAmong = 100;
const UnusableShareWatchSchema = Type.Object({
  /** frozen readings are not counted: they have an alarm of their own */
  kind: Type.Literal("unusable share"),
  share: Type.Number({ exclusiveMinimum: 0, maximum: 1 }),
  /** among this many last readings */
  among: Type.Integer({ minimum: 2, maximum: mostAmong }),
});
const SilentWatchSchema = Type.Object({
  kind: Type.Literal("silent"),
  /** no reading for this many periods of the stream, by the wall clock */
  periods: Type.Number({ minimum: 2 }),
});
const FrozenWatchSchema = Type.Object({ kind: Type.Literal("frozen") });
const DriftingWatchSchema = Type.Object({
  kind: Type.Literal("drifting"),
  /** of the smoothing, process time: what comes and goes faster is no drift */
  timeConstantMinutes: Type.Number({ exclusiveMinimum: 0, maximum: 100_000 }),
  /** beyond when the smoothed Q, going on as it does, would reach its limit within this time */
  withinMinutes: Type.Number({ exclusiveMinimum: 0, maximum: 1_000_000 }),
  /** … and has come to this share of its limit already: far below it, a process wanders up and down */
  fromRatio: Type.Number({ minimum: 0, exclusiveMaximum: 1 }),
  /** share of `withinMinutes`: the limit must be further away than `withinMinutes` · (1 + deadband) before the alarm clears */
  deadband: Type.Number({ minimum: 0 }),
});
const LabBiasWatchSchema = Type.Object({
  /** judged when a laboratory result comes in; its delays count pairs, not readings */
  kind: Type.Literal("lab bias"),
  property: Type.String(),
  /** unit of the property: a bias that matters. Say it beforehand: many pairs make a trifle significant */
  bias: Type.Number({ exclusiveMinimum: 0 }),
  /** unit of the property: the bias must fall to bias − deadband before the alarm clears */
  deadband: Type.Number({ minimum: 0 }),
  /** over how many of the newest pairs */
  pairs: Type.Integer({ minimum: 3, maximum: 40 }),
  /** of the t-test of bias, two-sided */
  confidence: Type.Number({ minimum: 0.5, exclusiveMaximum: 1 }),
});
export const WatchSchema = Type.Union([
  PropertyWatchSchema,
  StatisticWatchSchema,
  UnusableShareWatchSchema,
  SilentWatchSchema,
  FrozenWatchSchema,
  DriftingWatchSchema,
  LabBiasWatchSchema,
]);
export type Watch = Static<typeof WatchSchema>;
export type PropertyWatch = Static<typeof PropertyWatchSchema>;
export type UnusableShareWatch = Static<typeof UnusableShareWatchSchema>;
export type DriftingWatch = Static<typeof DriftingWatchSchema>;
export type LabBiasWatch = Static<typeof LabBiasWatchSchema>;

/** The property that a watch is about; undefined when it is about the reading as a whole. */
export function propertyOf(watch: Watch): string | undefined {
  return watch.kind === "property" || watch.kind === "lab bias" ? watch.property : undefined;
}

/** Engineering judgement, not a standard: no alarm stays shelved into the shift after the next. */
export const mostShelvedMinutes = 480;

export const AlarmRuleSchema = Type.Object({
  key: Type.String({ pattern: "^[a-z0-9-]{1,64}$" }),
  title: Type.String({ minLength: 1 }),
  watches: WatchSchema,
  onDelay: DelaySchema,
  offDelay: DelaySchema,
  priority: PrioritySchema,
  /**
   * What a reading that is not inside does to a property alarm. hold: nothing, until a trusted reading comes · evaluate: it counts like any
   * other · suppress: it counts as a return to normal. Other alarms take no notice of it.
   */
  untrusted: Type.Union([Type.Literal("hold"), Type.Literal("evaluate"), Type.Literal("suppress")]),
  /** stays after its condition has gone until a person resets it (default: no) */
  latching: Type.Optional(Type.Boolean()),
  /** states of the process in which it is suppressed by design, as the plant names them on `…/state`: "cleaning", "stopped" */
  suppressedIn: Type.Optional(Type.Array(ProcessStateWordSchema, { maxItems: 20 })),
  /** process time that the suppression outlasts those states: the line has a volume that must be swept out (default 0) */
  suppressedForMinutesAfter: Type.Optional(Type.Number({ minimum: 0, maximum: 10_000 })),
  /** nobody may shelve it for longer at a time (default {@link mostShelvedMinutes}) */
  mostShelvedMinutes: Type.Optional(Type.Number({ exclusiveMinimum: 0, maximum: 10_080 })),
  /** annunciated anew when it has stood acknowledged for so long, wall clock (default: never) */
  remindAfterMinutes: Type.Optional(Type.Number({ exclusiveMinimum: 0, maximum: 10_080 })),
  /** ISA-18.2 rationalization: an alarm without a response is none */
  purpose: Type.Object({
    cause: Type.String(),
    consequence: Type.String(),
    response: Type.String(),
    timeToRespondMinutes: Type.Number({ minimum: 0 }),
  }),
});
export type AlarmRule = Static<typeof AlarmRuleSchema>;

/** One version of all limits and alarm settings of a stream. */
export const LimitSetSchema = Type.Object({
  format: Type.Literal("millrace-limit-set"),
  formatVersion: Type.Literal(1),
  stream: Type.String({ pattern: "^[a-z0-9-]{1,64}$" }),
  version: Type.Integer({ minimum: 1 }),
  /** SHA-256 of the model that the statistics' limits were made for */
  model: Type.String(),
  statistics: Type.Object({
    t2: StatisticLimitSchema,
    q: StatisticLimitSchema,
    nearest: StatisticLimitSchema,
  }),
  alarms: Type.Array(AlarmRuleSchema),
  author: Type.String(),
  /** who approved it, where the plant asks for another person */
  approver: Type.Optional(Type.String()),
  reason: Type.String(),
  /** the rehearsal that spoke for it */
  evidence: Type.Optional(RehearsalEvidenceSchema),
  /** since when it is in force, epoch ms */
  time: Type.Number(),
});
export type LimitSet = Static<typeof LimitSetSchema>;

/** What a person writes before the first start: the alarms of a stream. Statistics come from the model. */
export const AlarmRulesFileSchema = Type.Object({
  format: Type.Literal("millrace-alarm-rules"),
  formatVersion: Type.Literal(1),
  author: Type.String({ minLength: 1 }),
  reason: Type.String({ minLength: 1 }),
  alarms: Type.Array(AlarmRuleSchema),
});
export type AlarmRulesFile = Static<typeof AlarmRulesFileSchema>;
