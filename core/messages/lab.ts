import { type Static, Type } from "typebox";
import { VerdictSchema } from "./verdict.ts";

const orNull = <T extends Parameters<typeof Type.Union>[0][number]>(schema: T) => Type.Union([schema, Type.Null()]);
const words = Type.String({ maxLength: 100 });

/** One laboratory result as it arrives: on `<prefix>/<site>/<stream>/lab`, as the body of a form, or as a row of a table. */
export const LabMessageSchema = Type.Object({
  /** when the sample was drawn (not when the result was there): RFC 3339 with an offset, or epoch ms */
  time: Type.Union([Type.String(), Type.Number()]),
  property: Type.String({ minLength: 1, maxLength: 100 }),
  value: Type.Number(),
  /** must be the unit of the property as the model has it: nothing is converted */
  unit: Type.String({ minLength: 1, maxLength: 40 }),
  method: Type.Optional(words),
  /** the laboratory's own name of the sample */
  sample: Type.Optional(words),
  /** who found it */
  by: Type.Optional(words),
});
export type LabMessage = Static<typeof LabMessageSchema>;

/** What makes two results the same one: a repeat changes nothing. "" where the sender does not say. */
export const LabIdentitySchema = Type.Object({
  property: Type.String(),
  /** when the sample was drawn, process time, epoch ms */
  time: Type.Number(),
  method: Type.String(),
  sample: Type.String(),
});
export type LabIdentity = Static<typeof LabIdentitySchema>;

/** Why a pair does not count in the statistics. */
export const apartReasons = ["not inside", "process moved"] as const;
export type ApartReason = (typeof apartReasons)[number];

/** A laboratory result beside the prediction for the same moment. */
export const LabPairSchema = Type.Object({
  /** mean over the readings; of those that were inside where the pair counts. Null where no reading had a number */
  predicted: orNull(Type.Number()),
  /** first and last reading behind it, and how many; two that stand before and after the moment when it was interpolated */
  from: Type.Number(),
  to: Type.Number(),
  readings: Type.Integer(),
  interpolated: Type.Boolean(),
  /** worst verdict among them */
  verdict: VerdictSchema,
  /** null: it counts */
  apart: orNull(Type.Enum(apartReasons)),
  /** the same in words, with what to make of it */
  says: Type.String(),
  model: orNull(Type.String()),
  limitSet: Type.Integer(),
  /** t, component by component, mean over the readings; null where no spectrum was kept */
  scores: orNull(Type.Array(Type.Number())),
});
export type LabPair = Static<typeof LabPairSchema>;

export const labOrigins = ["message", "form", "table", "history"] as const;
export type LabOrigin = (typeof labOrigins)[number];

/** What a person did to a result after it came in. */
const LabChangeSchema = Type.Object({
  kind: Type.Enum(["corrected", "withdrawn"] as const),
  /** the value before */
  was: Type.Number(),
  by: Type.String(),
  /** wall clock, epoch ms */
  at: Type.Number(),
  reason: Type.String(),
});

/** A laboratory result on record, in its newest version. */
export const LabResultSchema = Type.Object({
  stream: Type.String(),
  ...LabIdentitySchema.properties,
  value: Type.Number(),
  unit: Type.String(),
  by: Type.String(),
  /** wall clock, epoch ms; for recorded history the moment that it came in then */
  receivedAt: Type.Number(),
  origin: Type.Enum(labOrigins),
  version: Type.Integer({ minimum: 1 }),
  withdrawn: Type.Boolean(),
  /** everything that was done to it, oldest first */
  changes: Type.Array(LabChangeSchema),
  pair: LabPairSchema,
});
export type LabResult = Static<typeof LabResultSchema>;

/** GET /api/v1/streams/:id/lab?from&to&property — newest sample first, those that are withdrawn too. */
export const LabResultsSchema = Type.Object({ results: Type.Array(LabResultSchema) });
export type LabResults = Static<typeof LabResultsSchema>;

const reason = Type.String({ minLength: 1, maxLength: 2000 });
/** POST /api/v1/streams/:id/lab/correct */
export const CorrectLabSchema = Type.Object({ result: LabIdentitySchema, value: Type.Number(), reason });
/** POST /api/v1/streams/:id/lab/withdraw */
export const WithdrawLabSchema = Type.Object({ result: LabIdentitySchema, reason });

/** What became of one row of a table, or of the one result of a form. `row` counts as a text editor does: the header is 1. */
export const LabRowSchema = Type.Object({
  row: Type.Integer(),
  outcome: Type.Enum(["accepted", "already there", "refused"] as const),
  says: Type.String(),
});
export type LabRow = Static<typeof LabRowSchema>;

/** POST /api/v1/streams/:id/lab and …/lab/table. With one row refused nothing was taken: `done` is false and the answer is 422. */
export const LabImportSchema = Type.Object({
  done: Type.Boolean(),
  accepted: Type.Integer(),
  repeated: Type.Integer(),
  refused: Type.Integer(),
  rows: Type.Array(LabRowSchema),
});
export type LabImport = Static<typeof LabImportSchema>;
