import { makeModels } from "./chain.ts";

/** Before the tests: the demo's models, fitted once. */
export default async function setup(): Promise<void> {
  await makeModels();
}
