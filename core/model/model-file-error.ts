import { MillraceError, type Mismatch, mismatchSentence } from "../errors.ts";

/** A model file that cannot be used. `field` is where, `file` as it was given. */
export class ModelFileError extends MillraceError {
  readonly code = "model-file";
  readonly file: string;
  readonly field: string;
  constructor(file: string, field: string, mismatch: Mismatch) {
    super(`${file}: ${mismatchSentence(field, mismatch)}`, { cause: mismatch.cause });
    this.file = file;
    this.field = field;
  }
}
