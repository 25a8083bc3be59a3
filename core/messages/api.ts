import { type Static, Type } from "typebox";
import {
  ExcursionLabelSchema,
  ExcursionSchema,
  OpenAlarmSchema,
  PrioritySchema,
  RecordedEventSchema,
  RegionSchema,
  SetAsideAlarmSchema,
} from "./alarm.ts";
import { AxisUnitSchema } from "./reading.ts";
import { RehearsalEvidenceSchema } from "./rehearsal-evidence.ts";
import { JudgedSchema } from "./result.ts";

const orNull = <T extends Parameters<typeof Type.Union>[0][number]>(schema: T) => Type.Union([schema, Type.Null()]);
const numbers = Type.Array(Type.Number());
const sparseNumbers = Type.Array(orNull(Type.Number()));

/** GET /api/v1/plant: what the screens must know before they draw anything. */
export const PlantSchema = Type.Object({
  site: Type.String(),
  name: Type.String(),
  timeZone: Type.String(),
  version: Type.String(),
  serverTime: Type.Number(),
  /** an invented plant: the screens say so */
  demo: Type.Boolean(),
  /** who looks; `signedIn` is false where nobody needs to sign in */
  person: Type.Object({ name: Type.String(), role: Type.String(), signedIn: Type.Boolean() }),
  caution: Type.String(),
  streams: Type.Array(
    Type.Object({
      id: Type.String(),
      name: Type.String(),
      /** expected time between two live readings, ms; a live reading that comes more than `gapMs` after the one before leaves a gap */
      periodMs: Type.Number(),
      gapMs: Type.Number(),
      properties: Type.Array(
        Type.Object({
          name: Type.String(),
          unit: Type.String(),
          /** calibrated range */
          range: Type.Tuple([Type.Number(), Type.Number()]),
          target: Type.Optional(Type.Tuple([Type.Number(), Type.Number()])),
          /** fixed scale of the trend, so that a shape keeps its meaning */
          scale: Type.Tuple([Type.Number(), Type.Number()]),
          limits: Type.Array(
            Type.Object({
              side: Type.String(),
              limit: Type.Number(),
              priority: PrioritySchema,
            }),
          ),
        }),
      ),
      model: orNull(Type.Object({ id: Type.String(), name: Type.String() })),
      limitSet: Type.Integer(),
      /** why the stream cannot be scored at present, and what to do */
      trouble: Type.Optional(Type.String()),
    }),
  ),
});
export type Plant = Static<typeof PlantSchema>;
export type PlantStream = Plant["streams"][number];
export type PlantProperty = PlantStream["properties"][number];

/**
 * GET /api/v1/streams/:id/trend?from&to&points — columns, one entry an interval, empty intervals left out. With few readings each is its own
 * interval (`whole` is true, min = max = mean). Minimum and maximum are kept, so one odd reading is still seen in a long view.
 */
export const TrendSchema = Type.Object({
  stream: Type.String(),
  from: Type.Number(),
  to: Type.Number(),
  whole: Type.Boolean(),
  /** width of an interval in ms; 0 when `whole` */
  widthMs: Type.Number(),
  /** stretches without data, [last reading before, first reading after], as the engine saw them: no line is drawn across one */
  gaps: Type.Array(Type.Tuple([Type.Number(), Type.Number()])),
  /** time of the interval's middle reading, epoch ms, ascending */
  time: numbers,
  count: numbers,
  /** union of the verdict masks (core/messages/verdict.ts) */
  verdict: numbers,
  /** mean: over the readings that were inside where there are any, else over all; min and max: over all */
  properties: Type.Record(
    Type.String(),
    Type.Object({
      mean: sparseNumbers,
      min: sparseNumbers,
      max: sparseNumbers,
      uncertainty: sparseNumbers,
    }),
  ),
  /** largest ratio in the interval, and the mean */
  t2: Type.Object({ max: sparseNumbers, mean: sparseNumbers }),
  q: Type.Object({ max: sparseNumbers, mean: sparseNumbers }),
});
export type Trend = Static<typeof TrendSchema>;

/** GET /api/v1/streams/:id/reading?at — the last reading at or before `at`, explained. */
export const ReadingViewSchema = Type.Object({
  judged: JudgedSchema,
  receivedAt: Type.Number(),
  previous: orNull(Type.Number()),
  next: orNull(Type.Number()),
  /** beginnings of the excursions before and after it */
  excursions: Type.Object({ previous: orNull(Type.Number()), next: orNull(Type.Number()) }),
  limits: Type.Object({
    t2: Type.Number(),
    q: Type.Number(),
    nearest: Type.Number(),
  }),
  model: orNull(
    Type.Object({
      id: Type.String(),
      name: Type.String(),
      components: Type.Integer(),
    }),
  ),
  axis: Type.Object({ unit: AxisUnitSchema, points: numbers }),
  /** as received (on the model's axis where it could be brought there); null where the spectrum is no longer kept */
  spectrum: orNull(sparseNumbers),
  /** channel by channel over the calibration spectra, before the steps */
  calibration: orNull(Type.Object({ mean: numbers, low: numbers, high: numbers })),
  /** absent when the reading could not be scored */
  explanation: Type.Optional(
    Type.Object({
      /** after the model's steps: the reading, and what the model makes of it. The channels may be fewer (select). */
      axis: numbers,
      preprocessed: numbers,
      reconstructed: numbers,
      /** e = preprocessed − reconstructed */
      residual: numbers,
      /** adds up to T² */
      t2: numbers,
      /** e_j² with the sign of e_j; the absolute values add up to Q */
      q: numbers,
      /** by property: x_j b_j, adds up to the prediction's distance from the calibration's mean; unit of the property */
      predictions: Type.Array(
        Type.Object({ name: Type.String(), contributions: numbers, regions: Type.Array(RegionSchema) }),
      ),
      t2Regions: Type.Array(RegionSchema),
      qRegions: Type.Array(RegionSchema),
      /** the model's steps take a derivative: a residual tells of a slope then, not of more or less absorption */
      slopes: Type.Boolean(),
      /** the sentence in words */
      says: Type.String(),
      scores: numbers,
    }),
  ),
  /** T² ratio and Q ratio of every calibration sample, and their scores, for the reading's place among them */
  samples: Type.Optional(
    Type.Object({
      names: Type.Array(Type.String()),
      scores: Type.Array(numbers),
      t2: numbers,
      q: numbers,
    }),
  ),
});
export type ReadingView = Static<typeof ReadingViewSchema>;

export const RefusalSchema = Type.Object({
  id: Type.Integer(),
  /** null when no stream of ours is named */
  stream: orNull(Type.String()),
  topic: Type.String(),
  /** first and last time it came, wall clock */
  receivedAt: Type.Number(),
  lastAt: Type.Number(),
  count: Type.Integer(),
  reason: Type.String(),
  says: Type.String(),
});
export type Refusal = Static<typeof RefusalSchema>;

/** GET /api/v1/refusals?stream&limit */
export const RefusalsSchema = Type.Object({
  /** by stream ("" where none of ours was named) and reason, since the record began */
  totals: Type.Array(
    Type.Object({
      stream: Type.String(),
      reason: Type.String(),
      count: Type.Integer(),
    }),
  ),
  latest: Type.Array(RefusalSchema),
});
export type Refusals = Static<typeof RefusalsSchema>;

/** GET /api/v1/events?after&before&stream&limit — newest first. */
export const EventsSchema = Type.Object({
  events: Type.Array(RecordedEventSchema),
});
/** GET /api/v1/excursions?stream&from&to&limit — newest first. */
export const ExcursionsSchema = Type.Object({
  excursions: Type.Array(ExcursionSchema),
});
/** GET /api/v1/alarms — what is open now, and what annunciates nothing at present. */
export const AlarmsSchema = Type.Object({
  alarms: Type.Array(OpenAlarmSchema),
  setAside: Type.Array(SetAsideAlarmSchema),
});

const note = Type.Optional(Type.String({ maxLength: 2000 }));
const reason = Type.String({ minLength: 1, maxLength: 2000 });
/** POST /api/v1/streams/:id/alarms/:key/acknowledge; the same body for …/reset, …/unshelve and …/return-to-service */
export const AcknowledgeSchema = Type.Object({ note });
/** POST /api/v1/streams/:id/alarms/:key/shelve — `minutes`: for so long; without them: for the present activation only. */
export const ShelveSchema = Type.Object({
  reason,
  minutes: Type.Optional(Type.Number({ exclusiveMinimum: 0, maximum: 10_080 })),
});
/** POST /api/v1/streams/:id/alarms/:key/out-of-service — `until`: comes back by itself then (wall clock, epoch ms). */
export const TakeOutOfServiceSchema = Type.Object({ reason, until: Type.Optional(Type.Integer()) });
/** POST /api/v1/streams/:id/excursions/:kind/:start/label */
export const LabelExcursionSchema = Type.Object({ label: ExcursionLabelSchema, note });
/** POST /api/v1/streams/:id/excursions/:kind/:start/notes */
export const NoteExcursionSchema = Type.Object({ note: Type.String({ minLength: 1, maxLength: 2000 }) });
/** What every command answers when it was done; when not, 409 and a {@link ProblemSchema} with the reason. */
export const DoneSchema = Type.Object({ done: Type.Literal(true) });

const namedAlarm = { stream: Type.String(), key: Type.String(), title: Type.String(), priority: PrioritySchema };
const stretch = Type.Object({
  ...namedAlarm,
  /** since when its condition holds, and until when it did; absent: it holds still */
  since: Type.Number(),
  until: Type.Optional(Type.Number()),
});

/** A figure of the alarm system beside what is recommended for it. */
export const FigureSchema = Type.Object({
  key: Type.String(),
  title: Type.String(),
  /** null where there is nothing to judge */
  value: orNull(Type.Number()),
  unit: Type.String(),
  /** very likely acceptable up to here; the most that is manageable */
  acceptable: Type.Number(),
  manageable: Type.Optional(Type.Number()),
  /** the same in words, and where it is published */
  recommended: Type.String(),
  source: Type.String(),
  rating: orNull(Type.Enum(["acceptable", "manageable", "beyond"] as const)),
});
export type Figure = Static<typeof FigureSchema>;

/** GET /api/v1/alarms/performance?from&to&history — how well the alarm system itself does. Times are epoch ms. */
export const PerformanceSchema = Type.Object({
  from: Type.Number(),
  to: Type.Number(),
  days: Type.Number(),
  /** the standards judge from at least 30 days */
  enough: Type.Boolean(),
  /** entries into "unacknowledged"; what came while its alarm was set aside is counted apart */
  annunciations: Type.Integer(),
  withheld: Type.Integer(),
  figures: Type.Array(FigureSchema),
  byPriority: Type.Array(
    Type.Object({
      priority: PrioritySchema,
      count: Type.Integer(),
      percent: orNull(Type.Number()),
      /** about so many % */
      recommended: Type.Number(),
    }),
  ),
  byPrioritySource: Type.String(),
  /** more than 10 new alarms in 10 minutes until fewer than 5; `end` null: not over yet */
  floods: Type.Array(
    Type.Object({
      start: Type.Number(),
      end: orNull(Type.Number()),
      annunciations: Type.Integer(),
      /** most in any 10 minutes of it */
      peak: Type.Integer(),
    }),
  ),
  /** every alarm that was annunciated, the most frequent first */
  mostFrequent: Type.Array(Type.Object({ ...namedAlarm, count: Type.Integer(), percent: Type.Number() })),
  /** three times or more within a minute; `worst`: most within one minute */
  chattering: Type.Array(Type.Object({ ...namedAlarm, annunciations: Type.Integer(), worst: Type.Integer() })),
  /** gone unanswered within a minute */
  fleeting: Type.Array(Type.Object({ ...namedAlarm, annunciations: Type.Integer() })),
  /** in alarm for longer than 24 h */
  stale: Type.Array(stretch),
  /** in alarm at `to` */
  standing: Type.Array(stretch),
  acknowledging: Type.Object({
    acknowledged: Type.Integer(),
    never: Type.Integer(),
    medianMs: orNull(Type.Number()),
    ninthDecileMs: orNull(Type.Number()),
  }),
  /** annunciations in each whole hour: its beginning, and how many */
  hours: Type.Object({ at: numbers, count: Type.Array(Type.Integer()) }),
});
export type Performance = Static<typeof PerformanceSchema>;

/** Every refusal over HTTP. */
export const ProblemSchema = Type.Object({
  code: Type.String(),
  says: Type.String(),
});
export type Problem = Static<typeof ProblemSchema>;

const DifferenceSchema = Type.Object({
  /** the setting: `unfamiliar › onDelay › readings` */
  what: Type.String(),
  before: Type.Optional(Type.String()),
  after: Type.Optional(Type.String()),
});
const LimitChangeFields = {
  author: Type.String(),
  reason: Type.String(),
  time: Type.Number(),
  differences: Type.Array(DifferenceSchema),
  /** the rehearsal that spoke for it */
  evidence: Type.Optional(RehearsalEvidenceSchema),
};
/** GET /api/v1/streams/:id/limit-sets */
export const LimitSetsSchema = Type.Object({
  /** the limit set that judges now, whole (core/limit-set); null while the stream has no usable model */
  inForce: Type.Unknown(),
  /** "another person" where a change needs an approver */
  approval: orNull(Type.String()),
  /** newest first; the differences are those to the version before */
  versions: Type.Array(
    Type.Object({
      version: Type.Integer(),
      approver: Type.Optional(Type.String()),
      model: Type.String(),
      ...LimitChangeFields,
    }),
  ),
  /** what waits for approval; the differences are those to the limits in force */
  proposals: Type.Array(Type.Object({ id: Type.Integer(), base: Type.Integer(), ...LimitChangeFields })),
});
export type LimitSets = Static<typeof LimitSetsSchema>;

/** What came of a change of limits: a version in force, or a proposal that waits. */
export const LimitChangeOutcomeSchema = Type.Object({
  done: Type.Literal(true),
  version: Type.Optional(Type.Integer()),
  proposal: Type.Optional(Type.Integer()),
});
export type LimitChangeOutcome = Static<typeof LimitChangeOutcomeSchema>;
