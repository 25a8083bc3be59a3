import { type Static, Type } from "typebox";

/** A state of the process in the plant's own word: "running", "stopped", "cleaning". */
export const ProcessStateWordSchema = Type.String({ minLength: 1, maxLength: 64 });

/** What the control system says of a line, on `<prefix>/<site>/<stream>/state` (retained). */
export const ProcessStateMessageSchema = Type.Object({
  /** since when it has been so: RFC 3339 with an offset, or epoch ms */
  time: Type.Union([Type.String(), Type.Number()]),
  state: ProcessStateWordSchema,
  /** what is made */
  grade: Type.Optional(Type.String({ minLength: 1, maxLength: 200 })),
});

/** The state of a stream's process, decoded. */
export const ProcessStateSchema = Type.Object({
  state: ProcessStateWordSchema,
  grade: Type.Optional(Type.String()),
  /** process time since when it has been so, epoch ms */
  since: Type.Number(),
});
export type ProcessState = Static<typeof ProcessStateSchema>;
