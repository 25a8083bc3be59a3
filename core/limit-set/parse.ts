import { MillraceError, type Mismatch, mismatchSentence } from "../errors.ts";
import { checker } from "../messages/index.ts";
import {
  type AlarmRule,
  type AlarmRulesFile,
  AlarmRulesFileSchema,
  type LimitSet,
  LimitSetSchema,
  propertyOf,
} from "./limit-set.ts";

export class LimitSetError extends MillraceError {
  readonly code = "limit-set";
  readonly field: string;
  constructor(file: string, field: string, mismatch: Mismatch) {
    super(mismatchSentence(field ? `${file}: ${field}` : file, mismatch), {
      cause: mismatch.cause,
    });
    this.field = field;
  }
}

const limitSetChecker = checker(LimitSetSchema);
const rulesFileChecker = checker(AlarmRulesFileSchema);

/**
 * Reads a limit set. `properties` are the names that the stream's model predicts: an alarm may watch no other.
 * @throws LimitSetError naming the file and the field.
 */
export function parseLimitSet(text: string, file: string, properties: readonly string[]): LimitSet {
  const value = parseJson(text, file);
  const wrong = limitSetChecker.mismatch(value);
  if (wrong)
    throw new LimitSetError(file, wrong.field, {
      ...wrong,
      todo: "Correct it; the limits in force stay.",
    });
  const set = value as LimitSet;
  checkAlarms(set.alarms, file, properties);
  return set;
}

/** Reads the alarms that a person wrote for a stream. @throws LimitSetError naming the file and the field. */
export function parseAlarmRules(text: string, file: string, properties: readonly string[]): AlarmRulesFile {
  const value = parseJson(text, file);
  const wrong = rulesFileChecker.mismatch(value);
  if (wrong)
    throw new LimitSetError(file, wrong.field, {
      ...wrong,
      todo: "Correct it and start again.",
    });
  const rules = value as AlarmRulesFile;
  checkAlarms(rules.alarms, file, properties);
  return rules;
}

function parseJson(text: string, file: string): unknown {
  try {
    return JSON.parse(text);
  } catch (cause) {
    throw new LimitSetError(file, "", {
      got: `no JSON (${(cause as Error).message})`,
      expected: "a JSON object",
      todo: "Restore the file from a copy, or write it again.",
      cause,
    });
  }
}

function checkAlarms(alarms: readonly AlarmRule[], file: string, properties: readonly string[]): void {
  const seen = new Set<string>();
  alarms.forEach((rule, i) => {
    const fail = (field: string, mismatch: Mismatch): never => {
      throw new LimitSetError(file, `alarms[${i}].${field}`, mismatch);
    };
    if (seen.has(rule.key)) {
      fail("key", {
        got: `"${rule.key}" again`,
        expected: "a key of its own",
        todo: "Every alarm of a stream has one.",
      });
    }
    seen.add(rule.key);
    const property = propertyOf(rule.watches);
    if (property !== undefined && !properties.includes(property)) {
      fail("watches.property", {
        got: `"${property}"`,
        expected: `one of ${properties.map((name) => `"${name}"`).join(", ")}`,
        todo: "An alarm can watch only what the stream's model predicts.",
      });
    }
    for (const name of ["onDelay", "offDelay"] as const) {
      const { readings, of } = rule[name];
      if (of !== undefined && of < readings) {
        fail(`${name}.of`, {
          got: String(of),
          expected: `at least ${readings}`,
          todo: "k of n needs n ≥ k.",
        });
      }
    }
    checkPurpose(rule, fail);
  });
}

const purposeWords = {
  response: "what the operator is to do",
  cause: "what may have brought it about",
  consequence: "what comes of it when nobody acts",
} as const;

/** ISA-18.2 rationalization: no response, no alarm. What has none, or no time to respond, may still be kept on record. */
function checkPurpose({ priority, purpose }: AlarmRule, fail: (field: string, mismatch: Mismatch) => never): void {
  if (priority === "record only") return;
  const todo = 'Say it, or give the alarm the priority "record only".';
  for (const [name, expected] of Object.entries(purposeWords) as [keyof typeof purposeWords, string][]) {
    if (purpose[name].trim() === "") fail(`purpose.${name}`, { got: "empty", expected, todo });
  }
  if (purpose.timeToRespondMinutes <= 0) {
    fail("purpose.timeToRespondMinutes", { got: "0", expected: "the minutes that are left to respond", todo });
  }
}
