import { type Static, Type } from "typebox";
import { AlarmRuleSchema, LimitSetSchema } from "./limit-set.ts";

const SpanSchema = Type.Object({ from: Type.Number(), to: Type.Number() });

/** Limits that somebody is still thinking about, under a name that others can be sent to. They judge nothing. */
export const KeptLimitsSchema = Type.Object({
  stream: Type.String(),
  name: Type.String({ minLength: 1, maxLength: 80 }),
  /** the version that they were made from, and the model that they are for */
  base: Type.Integer(),
  model: Type.String(),
  statistics: LimitSetSchema.properties.statistics,
  alarms: Type.Array(AlarmRuleSchema),
  /** the stretch of history that they were rehearsed on */
  stretch: Type.Object({
    from: Type.Number(),
    to: Type.Number(),
    cuts: Type.Array(SpanSchema),
    cutStates: Type.Array(Type.String()),
  }),
  author: Type.String(),
  time: Type.Number(),
});
export type KeptLimits = Static<typeof KeptLimitsSchema>;
