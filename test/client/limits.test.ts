import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { type Browser, chromium, type Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { type Chain, startChain } from "../chain.ts";
import { findChromium } from "../chromium.ts";
import { signInAs, user } from "../people.ts";

let chain: Chain;
let browser: Browser;

/** A browser of their own, with somebody signed in and the limits of the recycled blend open. */
async function as(name: string): Promise<Page> {
  const page = await (await browser.newContext()).newPage();
  await page.goto(`${chain.url}/limits/bq-305`);
  await signInAs(page, name);
  await page.getByRole("heading", { name: "Versions" }).waitFor();
  return page;
}

beforeAll(async () => {
  chain = await startChain();
  await chain.stop();
  const config = join(chain.folder, "plant.json");
  writeFileSync(
    config,
    JSON.stringify({ ...JSON.parse(readFileSync(config, "utf8")), limits: { approval: "another person" } }),
  );
  chain = await chain.again();
  await user(chain, ["add", "E. Penn", "--role", "engineer"]);
  await user(chain, ["add", "O. Rook", "--role", "engineer"]);
  await user(chain, ["add", "V. Iew", "--role", "viewer"]);
  browser = await chromium.launch({ executablePath: findChromium(), args: ["--no-sandbox", "--disable-gpu"] });
});
afterAll(async () => {
  await browser?.close();
  await chain.stop();
  chain.remove();
});

test("limits are saved, changed in a file, proposed with their differences, approved by another person, and rolled back", async () => {
  const author = await as("E. Penn");
  const saving = author.waitForEvent("download");
  await author.getByRole("link", { name: "Save version 1 as a file" }).click();
  const saved = join(chain.folder, "saved.json");
  await (await saving).saveAs(saved);
  const set = JSON.parse(readFileSync(saved, "utf8"));
  set.alarms.find(({ key }: { key: string }) => key === "water-high").watches.limit = 5.8;
  const changed = join(chain.folder, "changed.json");
  writeFileSync(changed, JSON.stringify(set));

  await author.getByLabel("Read a changed file").setInputFiles(changed);
  await author.getByText("Water-high › watches › limit: 5.6 → 5.8").waitFor();
  await author.getByLabel("Reason", { exact: true }).fill("the dryer copes with more");
  await author.getByRole("button", { name: "Propose it" }).click();
  await author.getByText("Proposal 1 waits for another person.").waitFor();
  await author.getByRole("button", { name: "Approve proposal 1" }).click();
  await author.getByText(/E\. Penn proposed it; another person must approve/).waitFor();

  const other = await as("O. Rook");
  await other.getByText("the dryer copes with more").first().waitFor();
  await other.getByRole("button", { name: "Approve proposal 1" }).click();
  await other.getByText("Version 2 is in force from the next reading on.").waitFor();
  // The author's screen follows without being touched.
  await author.getByText(/^Version 2, in force since/).waitFor();
  await author.getByText("water above 5.8 wt%; clear below 5.6 wt%").waitFor();

  await other.getByLabel("Reason to go back to version 1").fill("it did not");
  await other.getByRole("button", { name: "Go back to version 1" }).click();
  await other.getByText("Proposal 2 waits for another person.").waitFor();
  await author.getByRole("button", { name: "Approve proposal 2" }).click();
  await author.getByText(/^Version 3, in force since/).waitFor();
  await author.getByText("Back to version 1. it did not").first().waitFor();
});

test("a file that is no limit set is refused in words, and a viewer is offered nothing to change", async () => {
  const author = await as("E. Penn");
  const nonsense = join(chain.folder, "nonsense.json");
  writeFileSync(nonsense, "[]");
  await author.getByLabel("Read a changed file").setInputFiles(nonsense);
  await author.getByRole("alert").filter({ hasText: "nonsense.json was not taken." }).waitFor();

  const viewer = await as("V. Iew");
  await viewer.getByText("An engineer can; V. Iew is here as viewer.").waitFor();
  expect(await viewer.getByRole("button", { name: /Go back|Approve|Propose/ }).count()).toBe(0);
});
