import { MillraceError } from "../../core/errors.ts";

export class ExportError extends MillraceError {
  readonly code = "export";
}
