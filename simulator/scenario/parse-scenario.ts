import { MillraceError, type Mismatch, mismatchSentence } from "../../core/errors.ts";
import { type Checker, checker, type SchemaMismatch } from "../../core/messages/index.ts";
import { streamIds } from "../plant/index.ts";
import { eventKinds } from "./event.ts";
import { type Scenario, ScenarioSchema } from "./scenario.ts";

/** A scenario that cannot be used: names its file and the field. */
export class ScenarioError extends MillraceError {
  readonly code = "scenario";
  readonly field: string;
  constructor(file: string, field: string, mismatch: Mismatch) {
    super(mismatchSentence(field === "" ? `${file}: the scenario` : `${file}: ${field}`, mismatch), {
      cause: mismatch.cause,
    });
    this.field = field;
  }
}

const todo = "Mend the file; `simulate --help` shows the form, kinds and streams.";
let compiled: Checker<Scenario> | undefined;

/**
 * Reads the text of a scenario file.
 *
 * @throws ScenarioError naming what was got and expected
 */
export function parseScenario(text: string, file: string): Scenario {
  let json: unknown;
  try {
    json = JSON.parse(text);
  } catch (cause) {
    throw new ScenarioError(file, "", {
      got: `not JSON (${(cause as Error).message})`,
      expected: "a JSON object",
      todo,
      cause,
    });
  }
  compiled ??= checker(ScenarioSchema);
  const misfit = compiled.mismatch(json);
  if (misfit) throw new ScenarioError(file, misfit.field, { got: misfit.got, expected: inWords(misfit), todo });
  const scenario = json as Scenario;
  scenario.events.forEach(({ kind, durationSeconds }, i) => {
    const field = `events[${i}].durationSeconds`;
    if (kind === "bubble" && durationSeconds !== undefined) {
      const expected = "nothing: a bubble spoils a single reading";
      throw new ScenarioError(file, field, { got: `${durationSeconds}`, expected, todo });
    }
    if (kind !== "bubble" && durationSeconds === undefined) {
      throw new ScenarioError(file, field, { got: "missing", expected: `a number of seconds for ${kind}`, todo });
    }
  });
  return scenario;
}

/** What a schema's complaint means to the one who wrote the file: lists what is accepted. */
function inWords({ field, got, expected }: SchemaMismatch): string {
  if (got === "missing") return "to be there";
  if (expected === "schema is false") return "no field of that name";
  if (/^events\[\d+\]\.kind$/.test(field)) return `one of ${eventKinds.join(", ")}`;
  if (/^events\[\d+\]\.stream$/.test(field)) return `one of ${streamIds.join(", ")}`;
  if (field === "format") return `"millrace-scenario"`;
  if (field === "formatVersion") return "1";
  return expected.replace(/^must /, "to ");
}
