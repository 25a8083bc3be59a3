import { type Static, Type } from "typebox";

export const streamIdPattern = "^[a-z0-9-]{1,64}$";
export const StreamIdSchema = Type.String({ pattern: streamIdPattern });
export type StreamId = string;

export const AxisUnitSchema = Type.Union([Type.Literal("nm"), Type.Literal("cm-1")]);
export const AxisSpecSchema = Type.Union([
  Type.Object({
    unit: AxisUnitSchema,
    start: Type.Number(),
    step: Type.Number(),
    count: Type.Integer({ minimum: 2, maximum: 65536 }),
  }),
  Type.Object({
    unit: AxisUnitSchema,
    points: Type.Array(Type.Number(), { minItems: 2, maxItems: 65536 }),
  }),
]);
/** The axis of a spectrum: evenly spaced (`step` may be negative), or point by point in either direction. */
export type AxisSpec = Static<typeof AxisSpecSchema>;

export const QualitySchema = Type.Union([Type.Literal("good"), Type.Literal("uncertain"), Type.Literal("bad")]);
export type Quality = Static<typeof QualitySchema>;

/** Everything of a reading as it arrives (JSON, or CBOR of the same shape), but `values`, which is checked apart: it may be a typed array. */
export const ReadingEnvelopeSchema = Type.Object({
  time: Type.Union([Type.String(), Type.Number()]),
  sequence: Type.Integer({ minimum: 0, maximum: Number.MAX_SAFE_INTEGER }),
  axis: Type.Optional(AxisSpecSchema),
  quality: Type.Optional(QualitySchema),
  context: Type.Optional(Type.Record(Type.String(), Type.Union([Type.Number(), Type.String()]))),
});

/** One spectrum with its time, sequence number and quality, decoded. Its identity is (stream, time, sequence). */
export interface Reading {
  /** the analyzer's own time, epoch ms */
  time: number;
  sequence: number;
  values: Float64Array;
  axis?: AxisSpec;
  quality?: Quality;
  context?: Record<string, number | string>;
}
