import { MillraceError, type Mismatch, mismatchSentence } from "../errors.ts";

/** A limit that cannot be worked out from what there is. */
export class LimitError extends MillraceError {
  readonly code = "limit";
  constructor(where: string, mismatch: Mismatch) {
    super(mismatchSentence(where, mismatch), { cause: mismatch.cause });
  }
}
