import { pino } from "pino";

export type LogLevel = "info" | "warn" | "error";
/** One line for the people who run the service. Never a secret in it: passwords and keys are not handed to it, and broker addresses hold none. */
export type Log = (says: string, level?: LogLevel) => void;

const asJson = pino(
  // A second guard: should a settings object ever be logged whole, these stay out.
  { redact: { paths: ["password", "*.password", "key", "*.key", "token", "*.token"], remove: true }, base: undefined },
  pino.destination({ fd: 2, sync: true }),
);

/** What goes on, on standard error: a sentence a line for a person at a terminal, a JSON object a line (level, time, part, msg) for programs. */
export function logOf(part: string): Log {
  if (process.stderr.isTTY) {
    return (says, level = "info") => {
      const word = level === "info" ? "" : `${level}: `;
      process.stderr.write(`${new Date().toISOString()} ${part}: ${word}${says}\n`);
    };
  }
  const logger = asJson.child({ part });
  return (says, level = "info") => logger[level](says);
}
