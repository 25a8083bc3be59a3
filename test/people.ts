import { spawn } from "node:child_process";
import { join } from "node:path";
import type { Page } from "playwright-core";
import type { Chain } from "./chain.ts";
import { program } from "./program.ts";

/** of everybody that a test adds */
export const password = "a long enough secret";

/** `millrace user …` for a chain, with a line on its standard input. */
export function user(
  { folder }: Pick<Chain, "folder">,
  args: readonly string[],
  input = `${password}\n`,
): Promise<{ code: number | null; out: string; err: string }> {
  const child = spawn(process.execPath, [program, "user", ...args, "--config", join(folder, "plant.json")]);
  let out = "";
  let err = "";
  child.stdout.on("data", (chunk) => (out += String(chunk)));
  child.stderr.on("data", (chunk) => (err += String(chunk)));
  child.stdin.end(input);
  return new Promise((resolve) => child.once("close", (code) => resolve({ code, out, err })));
}

/** Signs somebody in at the door that stands before every view. */
export async function signInAs(page: Page, name: string): Promise<void> {
  await page.getByLabel("Name").fill(name);
  await page.getByLabel("Password").fill(password);
  await page.getByRole("button", { name: "Sign in" }).click();
}
