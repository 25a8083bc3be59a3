import { type Static, Type } from "typebox";

const RehearsedFiguresSchema = Type.Object({
  /** times that somebody would have been called, per day of 24 h with data */
  perDay: Type.Number(),
  /** labelled troubles that were found, and that were missed */
  found: Type.Integer(),
  missed: Type.Integer(),
  /** calls that no labelled trouble explains */
  causeless: Type.Integer(),
  /** the longest time with data without a call, ms */
  longestQuietMs: Type.Number(),
});
/** What recorded history said of a change: the limits that were in force then beside those that were proposed. */
export const RehearsalEvidenceSchema = Type.Object({
  /** the stretch, epoch ms, and what was left of it after the cuts */
  from: Type.Number(),
  to: Type.Number(),
  cuts: Type.Integer(),
  readings: Type.Integer(),
  days: Type.Number(),
  /** the version that was in force, and its figures */
  version: Type.Integer(),
  inForce: RehearsedFiguresSchema,
  proposed: RehearsedFiguresSchema,
});
export type RehearsalEvidence = Static<typeof RehearsalEvidenceSchema>;
