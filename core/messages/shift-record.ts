import { type Static, Type } from "typebox";
import { ExcursionSchema, OpenAlarmSchema, PrioritySchema, RecordedEventSchema, SetAsideAlarmSchema } from "./alarm.ts";
import { HandoverEntrySchema, SigningSideSchema, WriteSchema } from "./handover-entry.ts";
import { ProcessStateSchema } from "./process-state.ts";
import { ShiftSchema } from "./shift.ts";
import { VerdictSchema, verdicts } from "./verdict.ts";

const orNull = <T extends Parameters<typeof Type.Union>[0][number]>(schema: T) => Type.Union([schema, Type.Null()]);
const Stretch = Type.Tuple([Type.Number(), Type.Number()]);

/** How a stretch of time is divided: by what could be believed of the readings, and the rest, in which there were none. */
export const timeKinds = [...verdicts, "no data"] as const;
export type TimeKind = (typeof timeKinds)[number];

/** One property over a stretch of time. Everything is of the readings that were inside: no other number is to be believed. */
export const PropertyAccountSchema = Type.Object({
  name: Type.String(),
  unit: Type.String(),
  target: Type.Optional(Stretch),
  /** decimals in which its numbers are to be written */
  decimals: Type.Integer(),
  mean: orNull(Type.Number()),
  min: orNull(Type.Number()),
  max: orNull(Type.Number()),
  /** ms outside the target, of those that were inside the calibration */
  outsideMs: Type.Number(),
});
export type PropertyAccount = Static<typeof PropertyAccountSchema>;

/** A stream over a stretch of time. The parts of `ms` add up to the whole of it. */
export const StreamAccountSchema = Type.Object({
  readings: Type.Integer(),
  ms: Type.Record(Type.Enum(timeKinds), Type.Number()),
  /** stretches without data, within the shift */
  gaps: Type.Array(Stretch),
  properties: Type.Array(PropertyAccountSchema),
});
export type StreamAccount = Static<typeof StreamAccountSchema>;

/** The small trend of a stream's first property: columns, one entry an interval. */
export const SmallTrendSchema = Type.Object({
  property: Type.String(),
  unit: Type.String(),
  target: Type.Optional(Stretch),
  time: Type.Array(Type.Number()),
  /** mean, over the readings that were inside where there are any */
  value: Type.Array(orNull(Type.Number())),
  /** worst verdict in the interval */
  verdict: Type.Array(VerdictSchema),
  gaps: Type.Array(Stretch),
});
export type SmallTrend = Static<typeof SmallTrendSchema>;

const EventLine = Type.Object({
  at: Type.Number(),
  stream: orNull(Type.String()),
  kind: Type.String(),
  says: Type.String(),
  by: Type.Optional(Type.String()),
});
export type EventLine = Static<typeof EventLine>;

const Weight = Type.Enum(["act", "know", "fine"] as const);
/** A sentence of the beginning: "act" is open and asks for somebody, "know" is worth knowing, "fine" says that something is in order. */
export const LeadSchema = Type.Object({ weight: Weight, stream: orNull(Type.String()), says: Type.String() });
export type Lead = Static<typeof LeadSchema>;

const StreamPart = Type.Object({
  stream: Type.String(),
  name: Type.String(),
  says: Type.String(),
  account: StreamAccountSchema,
  /** the shift before, as far as there is data of it */
  before: orNull(StreamAccountSchema),
  trend: orNull(SmallTrendSchema),
  /** what the plant said last of the line */
  process: Type.Optional(ProcessStateSchema),
});
export type StreamPart = Static<typeof StreamPart>;

const AlarmLine = Type.Object({
  stream: Type.String(),
  key: Type.String(),
  title: Type.String(),
  priority: PrioritySchema,
  /** how often somebody was called for it in the shift */
  count: Type.Integer(),
  first: Type.Number(),
  last: Type.Number(),
  /** of those, never acknowledged within the shift */
  unacknowledged: Type.Integer(),
  /** who acknowledged it */
  by: Type.Array(Type.String()),
  /** its condition holds at the end */
  standing: Type.Boolean(),
  chattering: Type.Boolean(),
  cause: Type.String(),
  response: Type.String(),
});
export type AlarmLine = Static<typeof AlarmLine>;

const AlarmPart = Type.Object({
  annunciations: Type.Integer(),
  /** of those, brought in by recorded history: nobody was called */
  history: Type.Integer(),
  /** conditions that came while their alarm was set aside: nobody was called */
  withheld: Type.Integer(),
  highest: orNull(PrioritySchema),
  unacknowledged: Type.Integer(),
  standing: Type.Integer(),
  mostInTenMinutes: Type.Integer(),
  floods: Type.Array(
    Type.Object({
      start: Type.Number(),
      end: orNull(Type.Number()),
      annunciations: Type.Integer(),
      peak: Type.Integer(),
    }),
  ),
  list: Type.Array(AlarmLine),
});
export type AlarmPart = Static<typeof AlarmPart>;

const LabLine = Type.Object({
  stream: Type.String(),
  property: Type.String(),
  unit: Type.String(),
  /** when the sample was taken */
  at: Type.Number(),
  laboratory: Type.Number(),
  predicted: orNull(Type.Number()),
  says: Type.String(),
  disagrees: Type.Boolean(),
});
export type ShiftLabLine = Static<typeof LabLine>;

const CheckLine = Type.Object({
  key: Type.String(),
  says: Type.String(),
  /** the last word on it; null: nobody has ticked it */
  entry: orNull(HandoverEntrySchema),
});
export type CheckLine = Static<typeof CheckLine>;

const ActionLine = Type.Object({
  number: Type.Integer(),
  says: Type.String(),
  owner: Type.String(),
  due: Type.Optional(Type.Number()),
  at: Type.Number(),
  by: Type.String(),
  /** beginning of the shift that it comes from */
  shift: Type.Number(),
  closed: orNull(Type.Object({ at: Type.Number(), by: Type.String(), says: Type.Optional(Type.String()) })),
});
export type ActionLine = Static<typeof ActionLine>;

/** The record of one shift: what the machine filled in and what people wrote, apart from each other. Times are epoch ms. */
export const ShiftRecordSchema = Type.Object({
  format: Type.Literal("millrace-shift-record"),
  formatVersion: Type.Literal(1),
  site: Type.String(),
  plant: Type.String(),
  timeZone: Type.String(),
  demo: Type.Boolean(),
  caution: Type.String(),
  shift: ShiftSchema,
  /** what it covers: from where the signed record before it ends (the shift's beginning, else), to the shift's end or the moment it was made */
  from: Type.Number(),
  to: Type.Number(),
  madeAt: Type.Number(),
  lead: Type.Array(LeadSchema),
  streams: Type.Array(StreamPart),
  /** as it stood at `to` */
  open: Type.Object({
    alarms: Type.Array(OpenAlarmSchema),
    excursions: Type.Array(ExcursionSchema),
    setAside: Type.Array(SetAsideAlarmSchema),
  }),
  excursions: Type.Array(ExcursionSchema),
  alarms: AlarmPart,
  changes: Type.Array(EventLine),
  laboratory: Type.Array(LabLine),
  process: Type.Array(EventLine),
  refused: Type.Array(
    Type.Object({
      stream: orNull(Type.String()),
      reason: Type.String(),
      says: Type.String(),
      count: Type.Integer(),
      first: Type.Number(),
      last: Type.Number(),
    }),
  ),
  service: Type.Array(EventLine),
  /** the server's clock was set back: where, and by how much, ms */
  clockSteps: Type.Array(Type.Object({ at: Type.Number(), backMs: Type.Number() })),
  notes: Type.Array(HandoverEntrySchema),
  actions: Type.Array(ActionLine),
  checks: Type.Array(CheckLine),
});
export type ShiftRecord = Static<typeof ShiftRecordSchema>;

/** GET /api/v1/handover/record?at — the record of the shift in which `at` lies, as it was signed, or as it is now. */
export const BoundRecordSchema = Type.Object({
  record: ShiftRecordSchema,
  /** SHA-256 of the record that the outgoing side signed; null: nobody has, and the record is as it is now */
  hash: orNull(Type.String()),
  /** what is kept under that hash no longer fits it: it was changed past all doors */
  altered: Type.Optional(Type.Literal(true)),
  /** all that people wrote to this shift, in the order of their numbers */
  entries: Type.Array(HandoverEntrySchema),
});
export type BoundRecord = Static<typeof BoundRecordSchema>;

/** GET /api/v1/handover/shifts — newest first, each with how far it was handed over. */
export const HandoverShiftsSchema = Type.Object({
  shifts: Type.Array(
    Type.Object({
      shift: ShiftSchema,
      is: Type.Enum(["open", "offered", "taken over"] as const),
      outgoing: Type.Optional(Type.String()),
      incoming: Type.Optional(Type.String()),
    }),
  ),
  /** who may sign in an invented plant, with the passwords, which are no secret there */
  invented: Type.Array(Type.Object({ name: Type.String(), password: Type.String() })),
});
export type HandoverShifts = Static<typeof HandoverShiftsSchema>;

/** GET /api/v1/handover/search?words — what people said, newest first; `count`: how many there are in all. */
export const SaidSchema = Type.Object({ events: Type.Array(RecordedEventSchema), count: Type.Integer() });
export type Said = Static<typeof SaidSchema>;

/** POST /api/v1/handover/entries — `shift`: any time in it, epoch ms. */
export const WriteToShiftSchema = Type.Object({ shift: Type.Integer(), write: WriteSchema });
/** POST /api/v1/handover/signatures — name and password again, whoever is signed in: both stand at the same screen. */
export const SignShiftSchema = Type.Object({
  shift: Type.Integer(),
  side: SigningSideSchema,
  /** hash of the record that the signer has before them; null where nobody has signed */
  // null first: a checker that brings types together would else make "" of it
  seen: Type.Union([Type.Null(), Type.String()]),
  name: Type.String({ minLength: 1, maxLength: 200 }),
  password: Type.String({ minLength: 1, maxLength: 1000 }),
});
export const WrittenSchema = Type.Object({ done: Type.Literal(true), entry: Type.Integer() });
