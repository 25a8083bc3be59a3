import { checker, type SchemaMismatch } from "../messages/index.ts";
import { checkModel } from "./check-model.ts";
import { type Model, ModelSchema } from "./model.ts";
import { ModelFileError } from "./model-file-error.ts";

const schema = checker(ModelSchema);
const todo = "Export the model again; a model that is in charge stays in charge.";

/**
 * Reads a model file and checks all of it: the schema, that every number is finite, and every matrix against the axis, the steps, the
 * components and the samples.
 *
 * @param file name for the messages
 * @throws ModelFileError naming the field
 */
export function parseModel(text: string, file: string): Model {
  let found: unknown;
  try {
    found = JSON.parse(text);
  } catch (cause) {
    const got = `no JSON (${(cause as Error).message})`;
    throw new ModelFileError(file, "the file", { got, expected: "JSON", todo, cause });
  }
  if (!schema.is(found)) {
    const { field, got, expected } = schema.mismatch(found) as SchemaMismatch;
    throw new ModelFileError(file, field || "the model", {
      got,
      expected: `what the format asks: it ${expected}`,
      todo,
    });
  }
  checkModel(found, file);
  return found;
}
