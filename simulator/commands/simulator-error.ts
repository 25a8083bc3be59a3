import { MillraceError } from "../../core/errors.ts";

/** Something that a person must mend before the simulator can go on. */
export class SimulatorError extends MillraceError {
  readonly code = "simulator";
}

/** A wrong use of the command line that only shows when options are looked at together: exit 2. */
export class UsageError extends MillraceError {
  readonly code = "usage";
}
