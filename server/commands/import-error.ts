import { MillraceError, mismatchSentence } from "../../core/errors.ts";

/** Matrices that do not make a model together. */
export class ImportError extends MillraceError {
  readonly code = "import";
  constructor(where: string, got: string, expected: string) {
    super(mismatchSentence(where, { got, expected, todo: "See millrace import-model --help." }));
  }
}
