import { type Static, Type } from "typebox";
import { VerdictSchema } from "./verdict.ts";

const orNull = <T extends Parameters<typeof Type.Union>[0][number]>(schema: T) => Type.Union([schema, Type.Null()]);

export const PredictionSchema = Type.Object({
  value: orNull(Type.Number()),
  /** half width of the interval, unit of the property; null where none is defensible (the reading is not inside) */
  uncertainty: orNull(Type.Number()),
});
export type Prediction = Static<typeof PredictionSchema>;

const ratioFields = {
  t2: orNull(Type.Number()),
  q: orNull(Type.Number()),
  nearest: orNull(Type.Number()),
};

/** A judged reading as it crosses HTTP and WebSocket: times are epoch ms. All numbers are null for an unusable reading. */
export const JudgedSchema = Type.Object({
  stream: Type.String(),
  time: Type.Number(),
  sequence: Type.Integer(),
  properties: Type.Record(Type.String(), PredictionSchema),
  t2: orNull(Type.Number()),
  q: orNull(Type.Number()),
  leverage: orNull(Type.Number()),
  nearest: orNull(Type.Number()),
  /** each statistic divided by its limit: 1 is the limit on every stream */
  ratios: Type.Object(ratioFields),
  verdict: Type.Array(VerdictSchema),
  /** why it is unusable, in words */
  unusable: Type.Optional(Type.String()),
  /** the same in a word, for programs: "frozen", "saturated", "wrong length" … */
  unusableReason: Type.Optional(Type.String()),
  /** SHA-256 of the model that scored it; null when it could not be scored */
  model: orNull(Type.String()),
  limitSet: Type.Integer(),
});
export type Judged = Static<typeof JudgedSchema>;

/** The same as it is published on `…/result`: the stream stands in the topic, the time is RFC 3339 in UTC. */
export const ResultSchema = Type.Object({
  ...Type.Omit(JudgedSchema, ["stream", "time"]).properties,
  time: Type.String(),
});
export type Result = Static<typeof ResultSchema>;

export function resultOf({ stream: _, time, ...rest }: Judged): Result {
  return { time: new Date(time).toISOString(), ...rest };
}
