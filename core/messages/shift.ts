import { type Static, Type } from "typebox";

/** One shift, known by its beginning: `from` ≤ time < `to`, epoch ms. */
export const ShiftSchema = Type.Object({
  from: Type.Number(),
  to: Type.Number(),
  name: Type.String(),
  team: Type.Optional(Type.String()),
  /** false: a time that no shift of the plan covers. It is kept as one all the same, so that nothing falls between two records */
  staffed: Type.Boolean(),
});
export type Shift = Static<typeof ShiftSchema>;

/** GET /api/v1/shifts?around&before&after — the shift in which `around` lies, and its neighbours; each list is in the order of time. */
export const ShiftsSchema = Type.Object({
  before: Type.Array(ShiftSchema),
  current: ShiftSchema,
  after: Type.Array(ShiftSchema),
});
export type Shifts = Static<typeof ShiftsSchema>;
