/** What was got, what was expected, and what to do: the three parts of every sentence that a person must act on. */
export interface Mismatch {
  got: string;
  expected: string;
  todo: string;
  cause?: unknown;
}

/** Base of every error that a person must mend. `code` is for programs, the message is for people. */
export abstract class MillraceError extends Error {
  abstract readonly code: string;
}

/** A sentence of the one form that all of ours have. `where` names the file, field or line. */
export function mismatchSentence(where: string, { got, expected, todo }: Mismatch): string {
  return `${where} is ${got}, expected ${expected}. ${todo}`;
}
