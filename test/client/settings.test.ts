import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { type Chain, eventually, startChain } from "../chain.ts";
import { signInAs, user } from "../people.ts";
import { accessFaults, lane, openBrowser, openPage } from "./browser.ts";

/* What a person arranges is theirs, on whatever screen they sign in. */
let chain: Chain;
let browser: Browser;
let page: Page;

async function as(name: string): Promise<Page> {
  const opened = await openPage(browser, `${chain.url}/watch?last=900`, { height: 1400 });
  await signInAs(opened.page, name);
  await lane(opened.page, "bq-410").waitFor();
  return opened.page;
}

const lanesOf = async (of: Page) =>
  of
    .locator("mill-watch-lane h2 small")
    .allTextContents()
    .then((ids) => ids.join(" "));

beforeAll(async () => {
  [chain, browser] = await Promise.all([startChain({ simulate: "calm" }), openBrowser()]);
  await user(chain, ["add", "O. Penn", "--role", "operator"]);
  await user(chain, ["add", "V. Iew", "--role", "viewer"]);
  page = await as("O. Penn");
});
afterAll(async () => {
  await browser?.close();
  await chain?.stop();
  chain?.remove();
});

test("lanes are moved and grouped by the keyboard alone, and axe-core finds nothing in it", async () => {
  expect(await lanesOf(page)).toBe("bq-201 bq-305 bq-410");
  await page.getByRole("button", { name: "Arrange the lanes" }).press("Enter");
  await page.getByLabel("Dryer outlet: group").fill("Drying");
  await page.getByLabel("Dryer outlet: group").press("Tab");
  await page.getByRole("button", { name: "Dryer outlet: up" }).press("Enter");
  await page.getByRole("heading", { name: "Drying" }).waitFor();
  await eventually("the dryer on top", async () => (await lanesOf(page)) === "bq-410 bq-201 bq-305");
  expect(await accessFaults(page)).toEqual([]);
  await page.getByRole("button", { name: "Done" }).press("Enter");
});

test("a lane draws several properties above one another, with one trust ribbon, values at one cursor and a column each in the table", async () => {
  const blend = lane(page, "bq-305");
  await blend.getByRole("button", { name: "Trend of water, too" }).click();
  expect(await blend.locator("mill-lane-chart").count()).toBe(2);
  expect(await blend.locator("mill-lane-chart[upper]").count()).toBe(1);
  await blend.locator(".caption", { hasText: "Water, wt%" }).waitFor();
  await blend.getByRole("button", { name: "Table of Recycled blend" }).click();
  expect(await blend.locator(".table th").allTextContents()).toEqual([
    "Time, UTC",
    "Ethyl acetate",
    "Water",
    "Verdict",
    "T² ratio",
    "Q ratio",
  ]);
});

test("on another screen it is the same for the same person, and the plant's own for another", async () => {
  await page.getByRole("combobox", { name: "Light or dark" }).selectOption("dark");
  await page.waitForResponse((answer) => answer.url().endsWith("/me/settings") && answer.request().method() === "PUT");
  const same = await as("O. Penn");
  await eventually("the same arrangement", async () => (await lanesOf(same)) === "bq-410 bq-201 bq-305");
  await eventually("both trends", async () => (await lane(same, "bq-305").locator("mill-lane-chart").count()) === 2);
  expect(await same.locator("html").getAttribute("data-theme")).toBe("dark");
  const other = await as("V. Iew");
  expect(await lanesOf(other)).toBe("bq-201 bq-305 bq-410");
  expect(await other.locator("html").getAttribute("data-theme")).toBe("light");
});
