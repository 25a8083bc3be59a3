import { type Static, Type } from "typebox";
import { type LimitSet, LimitSetSchema } from "../limit-set/index.ts";
import { ProcessStateWordSchema } from "../messages/index.ts";
import type { LabelledEvent, Outcome } from "./outcome.ts";
import { SettingSchema } from "./setting.ts";
import type { StatisticPicture } from "./statistics.ts";
import type { Span } from "./stretch.ts";
import type { SweepCell } from "./sweep.ts";

const SpanSchema = Type.Object({ from: Type.Number(), to: Type.Number() });

/** More choices than this are refused: nobody reads such a map. */
export const mostSweepValues = 50;

export const SweepingSchema = Type.Object({
  setting: SettingSchema,
  values: Type.Array(Type.Number(), { minItems: 1, maxItems: mostSweepValues }),
});

/** What is to be rehearsed: recorded history of a stream under the limits in force and, where given, under others. */
export const RehearsalRequestSchema = Type.Object({
  from: Type.Number(),
  to: Type.Number(),
  /** stretches that a person leaves out */
  cuts: Type.Optional(Type.Array(SpanSchema, { maxItems: 500 })),
  /** and the times in which the process was in one of these states */
  cutStates: Type.Optional(Type.Array(ProcessStateWordSchema, { maxItems: 20 })),
  /** the proposed limits; for another model than the one in charge it names that model, and recorded spectra are scored again */
  limitSet: Type.Optional(LimitSetSchema),
  /** numbers changed in the proposed limits (in those in force, where no others are given), one after the other */
  settings: Type.Optional(Type.Array(Type.Object({ setting: SettingSchema, value: Type.Number() }), { maxItems: 200 })),
  /** how the statistics went, beside the theory */
  pictures: Type.Optional(Type.Boolean()),
  /** one or two settings of the proposed limits, varied against each other */
  sweep: Type.Optional(Type.Array(SweepingSchema, { minItems: 1, maxItems: 2 })),
});
export type RehearsalRequest = Static<typeof RehearsalRequestSchema>;

/** What came of it. */
export interface RehearsalResult {
  stretch: {
    stream: string;
    /** first and last reading, epoch ms */
    from: number;
    to: number;
    readings: number;
    cut: Span[];
    /** states of the process that are on record in it */
    states: string[];
  };
  truth: LabelledEvent[];
  /** of this version */
  version: number;
  inForce: Outcome;
  proposed?: Outcome;
  /** the limits that were proposed, whole, with the settings taken over */
  limitSet?: LimitSet;
  pictures?: { t2: StatisticPicture; q: StatisticPicture };
  sweep?: { cells: SweepCell[]; best: SweepCell[] };
}

/** Where a rehearsal stands. `done` of `total` is in readings, or in choices of a sweep; `restMs`: how long the rest will take, as far as can be told. */
export type RehearsalStanding =
  | { state: "running"; doing: string; done: number; total: number; restMs: number | null }
  | { state: "done"; result: RehearsalResult }
  | { state: "failed"; says: string }
  | { state: "cancelled" };
