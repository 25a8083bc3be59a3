import { MillraceError } from "../../core/errors.ts";

/** A request that cannot be answered: its status and the sentence for the person who asked. */
export class RequestError extends MillraceError {
  readonly code: string;
  readonly status: number;
  constructor(status: number, code: string, says: string) {
    super(says);
    this.status = status;
    this.code = code;
  }
}
