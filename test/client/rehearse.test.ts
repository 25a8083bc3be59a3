import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { RecordedEvent } from "../../core/messages/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { signInAs, user } from "../people.ts";
import { accessFaults, openBrowser } from "./browser.ts";

let chain: Chain;
let browser: Browser;

async function as(name: string, path: string): Promise<Page> {
  const page = await (await browser.newContext({ viewport: { width: 1280, height: 900 } })).newPage();
  page.setDefaultTimeout(30_000);
  await page.goto(`${chain.url}${path}`);
  await signInAs(page, name);
  return page;
}

beforeAll(async () => {
  chain = await startChain({ historyDays: 14 });
  await eventually(
    "the history",
    async () => {
      const { events } = await chain.get<{ events: RecordedEvent[] }>("/events?about=history&limit=20");
      return events.filter(({ kind }) => kind === "history loaded").length >= 3;
    },
    180_000,
  );
  await chain.stop();
  const config = join(chain.folder, "plant.json");
  writeFileSync(
    config,
    JSON.stringify({ ...JSON.parse(readFileSync(config, "utf8")), limits: { approval: "another person" } }),
  );
  chain = await chain.again();
  await user(chain, ["add", "E. Penn", "--role", "engineer"]);
  await user(chain, ["add", "O. Rook", "--role", "engineer"]);
  browser = await openBrowser();
}, 240_000);
afterAll(async () => {
  await browser?.close();
  await chain.stop();
  chain.remove();
});

test("the whole path: brushed, changed, compared, swept, kept, proposed with its evidence, approved, rolled back", async () => {
  const page = await as("E. Penn", "/rehearse/bq-410");
  const outcome = page.getByRole("region", { name: "What would have happened" });
  await outcome.getByRole("row", { name: /^Calls per day/ }).waitFor();
  expect(await accessFaults(page)).toEqual([]);

  const readings = async () => {
    const said = await outcome
      .getByText(/readings/)
      .first()
      .textContent();
    return Number(said!.split("readings")[0].replace(/\D/g, ""));
  };
  const whole = await readings();
  const strip = (await outcome.locator("svg").first().boundingBox())!;
  await page.mouse.move(strip.x + strip.width * 0.3, strip.y + 10);
  await page.mouse.down();
  await page.mouse.move(strip.x + strip.width * 0.5, strip.y + 10, { steps: 4 });
  await page.mouse.up();
  await outcome.getByText(/1 stretch left out/).waitFor();
  expect(await readings()).toBeLessThan(whole);

  await page.getByLabel("Q: limit itself").fill("1");
  await page.getByLabel("Q: limit itself").press("Tab");
  // Q of this stream lies far below 1: nothing is unfamiliar under such a limit.
  const unfamiliar = page
    .getByRole("region", { name: "Alarm by alarm" })
    .getByRole("row", { name: /^Unfamiliar spectrum/ });
  await eventually(
    "the proposed limits' figures",
    async () => (await unfamiliar.getByRole("cell").nth(2).textContent()) === "0",
  );

  await page.getByRole("combobox", { name: "Vary" }).selectOption({ label: "unfamiliar: comes after readings" });
  await page.locator('input[name="from0"]').fill("2");
  await page.locator('input[name="to0"]').fill("6");
  await page.getByRole("button", { name: "Sweep" }).click();
  const choices = page.getByRole("button", { name: /calls per day, \d+ missed/ });
  await choices.first().waitFor();
  expect(await choices.count()).toBe(5);
  expect(await page.getByRole("button", { name: /among the best/ }).count()).toBeGreaterThan(0);
  await choices.nth(3).click();
  await page.getByText("Unfamiliar spectrum", { exact: false }).filter({ hasText: "changed" }).first().waitFor();

  await page.getByLabel("Keep them as").fill("quieter nights");
  await page.getByRole("button", { name: "Keep", exact: true }).click();
  await page.getByRole("link", { name: "quieter nights" }).waitFor();

  await eventually(
    "the rehearsal of these limits",
    async () => !(await page.getByRole("button", { name: "Cancel" }).isVisible()),
  );
  await page.getByLabel("Reason", { exact: true }).fill("bubbles at night");
  await page.getByRole("button", { name: "Propose them, with this rehearsal" }).click();
  await page.getByText("Proposed; another person must approve it under Limits.").waitFor();

  const other = await as("O. Rook", "/limits/bq-410");
  await other.getByText(/Rehearsed on/).waitFor();
  await other.getByRole("button", { name: "Approve proposal 1" }).click();
  await other.getByText("Version 2 is in force from the next reading on.").waitFor();
  await other.getByLabel("Reason to go back to version 1").fill("a trial");
  await other.getByRole("button", { name: "Go back to version 1" }).click();
  await other.getByText("Proposal 2 waits for another person.").waitFor();

  await other.goto(`${chain.url}/rehearse/bq-410?kept=quieter%20nights`);
  await other.getByText(/1 stretch left out/).waitFor(); // whoever follows the link sees what was kept, cuts and all
});

test("a stretch without data says so", async () => {
  const page = await as("E. Penn", "/rehearse/bq-410?from=2001-01-01T00:00:00Z&to=2001-01-02T00:00:00Z");
  await page.getByText(/has no readings\. Choose another\./).waitFor();
});
