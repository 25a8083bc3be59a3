import { type Static, Type } from "typebox";
import { ExcursionSchema, OpenAlarmSchema, RecordedEventSchema, SetAsideAlarmSchema } from "./alarm.ts";
import { ProcessStateSchema } from "./process-state.ts";
import { JudgedSchema } from "./result.ts";

/** A screen that has heard nothing on its link for this long says that the link is lost. Beats come every second. */
export const linkLostAfterMs = 4000;
export const beatEveryMs = 1000;

export const SubscribeSchema = Type.Object({
  type: Type.Literal("subscribe"),
  streams: Type.Array(Type.String(), { maxItems: 1000 }),
  /** the last cursor that the client has seen: events after it are sent again */
  since: Type.Optional(Type.Integer({ minimum: 0 })),
});
export type Subscribe = Static<typeof SubscribeSchema>;

/** The engine's own health, as every beat carries it. */
export const EngineHealthSchema = Type.Object({
  running: Type.Boolean(),
  /** is the source of readings (the broker) reached? */
  source: Type.Boolean(),
  /** readings that wait to be judged, and the age of the oldest in ms */
  waiting: Type.Integer(),
  behindMs: Type.Number(),
  /** the record cannot be written (disk full, say): in words, with what to do */
  trouble: Type.Optional(Type.String()),
  /** bulk load of history under way: share done, 0–1 */
  loading: Type.Optional(
    Type.Object({
      stream: Type.String(),
      done: Type.Integer(),
      share: Type.Number(),
    }),
  ),
});
export type EngineHealth = Static<typeof EngineHealthSchema>;

export const StreamNowSchema = Type.Object({
  stream: Type.String(),
  latest: Type.Union([JudgedSchema, Type.Null()]),
  /** when the engine received the latest reading, wall clock, epoch ms */
  receivedAt: Type.Union([Type.Number(), Type.Null()]),
  /** the last reading that was inside */
  lastInside: Type.Union([JudgedSchema, Type.Null()]),
  /** since when the present worst verdict has held, process time, epoch ms */
  verdictSince: Type.Union([Type.Number(), Type.Null()]),
  alarms: Type.Array(OpenAlarmSchema),
  /** alarms that annunciate nothing at present: shelved, suppressed by design, out of service */
  setAside: Type.Array(SetAsideAlarmSchema),
  /** what the plant says of the line; absent while it has said nothing */
  process: Type.Optional(ProcessStateSchema),
  excursions: Type.Array(ExcursionSchema),
  refused: Type.Integer(),
  /** the property alarms are held while the reading is not inside */
  held: Type.Boolean(),
  /** why the stream cannot be scored at present, and what to do */
  trouble: Type.Optional(Type.String()),
});
export type StreamNow = Static<typeof StreamNowSchema>;

export const HelloSchema = Type.Object({
  type: Type.Literal("hello"),
  protocol: Type.Literal(1),
  version: Type.String(),
  serverTime: Type.Number(),
});
export const SnapshotSchema = Type.Object({
  type: Type.Literal("snapshot"),
  serverTime: Type.Number(),
  cursor: Type.Integer(),
  engine: EngineHealthSchema,
  streams: Type.Array(StreamNowSchema),
  /** events after `since`, when the client asked for them */
  events: Type.Array(RecordedEventSchema),
});
/**
 * What has changed. `now` holds each touched stream's newest state (conflated for a slow client: the latest wins); `readings` are the judged
 * readings since the last batch, oldest first, for the trend (a slow client may miss some: `skipped` counts them, and the client reads the
 * stretch again over HTTP); `events` are never left out.
 */
export const BatchSchema = Type.Object({
  type: Type.Literal("batch"),
  serverTime: Type.Number(),
  cursor: Type.Integer(),
  now: Type.Array(StreamNowSchema),
  readings: Type.Array(JudgedSchema),
  skipped: Type.Integer(),
  events: Type.Array(RecordedEventSchema),
});
export const BeatSchema = Type.Object({
  type: Type.Literal("beat"),
  serverTime: Type.Number(),
  engine: EngineHealthSchema,
});
export const RefusalFromServerSchema = Type.Object({
  type: Type.Literal("refused"),
  says: Type.String(),
});
export const FromServerSchema = Type.Union([
  HelloSchema,
  SnapshotSchema,
  BatchSchema,
  BeatSchema,
  RefusalFromServerSchema,
]);
export type FromServer = Static<typeof FromServerSchema>;
export type Snapshot = Static<typeof SnapshotSchema>;
export type Batch = Static<typeof BatchSchema>;
