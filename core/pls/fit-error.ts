import { MillraceError, type Mismatch, mismatchSentence } from "../errors.ts";

/** A table that cannot be calibrated as it is asked. */
export class FitError extends MillraceError {
  readonly code = "fit";
  constructor(where: string, mismatch: Mismatch) {
    super(mismatchSentence(where, mismatch), { cause: mismatch.cause });
  }
}
