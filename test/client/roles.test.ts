import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, startChain } from "../chain.ts";
import { signInAs, user } from "../people.ts";
import { openBrowser, openPage } from "./browser.ts";

/* One alarm of one stream, before people of three roles: what each may do to it, and what the screen says when they may not. */
const plant = makePlant(1);
const shelfMs = 4000;
let chain: Chain;
let browser: Browser;
const pages = new Map<string, Page>();

const card = (who: string) =>
  pages.get(who)!.locator("section.card", { hasText: "Unfamiliar spectrum" }).locator("mill-alarm-card").first();
const setAside = (who: string) => pages.get(who)!.getByText("Set aside: these say nothing at present");

beforeAll(async () => {
  [chain, browser] = await Promise.all([startChain(), openBrowser()]);
  for (const role of ["viewer", "operator", "engineer"]) {
    await user(chain, ["add", role, "--role", role]);
    const { page } = await openPage(browser, `${chain.url}/alarms`);
    await signInAs(page, role);
    pages.set(role, page);
  }
  const now = Date.now();
  for (let n = 0; n < 3; n++) {
    const time = now - 1000 + n * 100;
    const values = Array.from(spectrumAt(plant, "bq-305", time), (value, j) => value + (j > 200 && j < 230 ? 0.1 : 0));
    await chain.publish("bq-305", { time, sequence: n, values });
  }
  await card("viewer").waitFor();
}, 60_000);
afterAll(async () => {
  await browser?.close();
  await chain?.stop();
  chain?.remove();
});

test("a viewer who acknowledges is refused in words, and the alarm still waits", async () => {
  await card("viewer").getByRole("button", { name: "Acknowledge" }).click();
  await card("viewer").getByText("Not done: viewer is viewer; this needs operator.").waitFor();
  expect(await card("operator").getByText("not acknowledged").count()).toBe(1);
});

test("a viewer who shelves is refused, and nothing is set aside", async () => {
  await card("viewer").getByText("Shelve for a while").click();
  await card("viewer").getByLabel("Reason").fill("no right to");
  await card("viewer").getByRole("button", { name: "Shelve" }).click();
  await card("viewer").getByText("Not done: viewer is viewer; this needs operator.").waitFor();
  expect(await setAside("operator").count()).toBe(0);
});

test("an operator may acknowledge, but is not offered to take an alarm out of service; an engineer is", async () => {
  await card("operator").getByRole("button", { name: "Acknowledge" }).click();
  await card("viewer")
    .getByText(/acknowledged[\s\S]*, operator/)
    .waitFor();
  expect(await card("operator").getByText("Take out of service").count()).toBe(0);
  expect(await card("engineer").getByText("Take out of service").count()).toBe(1);
});

test("a shelf that ends brings the alarm back by itself, on the screens of all, not acknowledged", async () => {
  const answer = await pages.get("operator")!.evaluate(async (minutes) => {
    const body = JSON.stringify({ reason: "a short trial", minutes });
    const headers = { "content-type": "application/json" };
    const path = "/api/v1/streams/bq-305/alarms/unfamiliar/shelve";
    return (await fetch(path, { method: "POST", headers, body })).status;
  }, shelfMs / 60_000);
  expect(answer).toBe(200);
  await setAside("viewer").waitFor();
  await pages
    .get("viewer")!
    .getByText(/operator: a short trial/)
    .first()
    .waitFor();
  await setAside("viewer").waitFor({ state: "detached", timeout: shelfMs + 8000 });
  await card("viewer").getByText("not acknowledged").waitFor();
});
