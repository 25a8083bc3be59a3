export { canonicalJson } from "./canonical-json.ts";
export { checkModel } from "./check-model.ts";
export { type Model, type ModelProperty, ModelPropertySchema, ModelSchema } from "./model.ts";
export { ModelFileError } from "./model-file-error.ts";
export { modelId } from "./model-id.ts";
export { parseModel } from "./parse-model.ts";
