import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { type Chain, eventually, startChain } from "../chain.ts";
import { accessFaults, lane, openBrowser, openPage, wordsOf } from "./browser.ts";

/* Every view of the product, by its own list, so that a new one is looked at too. */
let chain: Chain;
let browser: Browser;

beforeAll(async () => {
  [chain, browser] = await Promise.all([startChain({ simulate: "calm", historyDays: 1 }), openBrowser()]);
}, 60_000);
afterAll(async () => {
  await browser?.close();
  await chain?.stop();
  chain?.remove();
});

async function settled(page: Page): Promise<void> {
  await page.getByText("link up", { exact: true }).waitFor();
  await page.locator("main > :not(p)").first().waitFor();
  await page.waitForTimeout(600);
}

/** Every view, as the navigation leads to them: a new one is looked at without being named here. */
async function paths(page: Page): Promise<string[]> {
  const hrefs = await page
    .locator("mill-view-nav a")
    .evaluateAll((links) => links.map((link) => link.getAttribute("href")));
  expect(hrefs.length).toBeGreaterThanOrEqual(6);
  return hrefs.map((href) => String(href));
}

test.each(["light", "dark"] as const)(
  "no view has a fault that axe-core finds, in %s, and none complains",
  async (theme) => {
    const { page, complaints, close } = await openPage(browser, chain.url, { theme });
    await settled(page);
    for (const path of await paths(page)) {
      await page.goto(chain.url + path);
      await settled(page);
      expect([path, await accessFaults(page)]).toEqual([path, []]);
      expect([path, complaints]).toEqual([path, []]);
    }
    await close();
  },
  120_000,
);

// WCAG 2.2, 1.4.10: at 320 CSS px (1280 at 400 %) nothing has to be scrolled in two directions; 1.4.4: 640 is 1280 at 200 %.
test.each([320, 640])(
  "every view fits a screen of %i px without scrolling sideways",
  async (width) => {
    const { page, close } = await openPage(browser, chain.url, { width });
    await settled(page);
    const overhangs: [string, unknown][] = [];
    for (const path of await paths(page)) {
      await page.goto(chain.url + path);
      await settled(page);
      overhangs.push([
        path,
        await page.evaluate("document.documentElement.scrollWidth - document.documentElement.clientWidth"),
      ]);
    }
    expect(overhangs).toEqual(overhangs.map(([path]) => [path, 0]));
    await close();
  },
  120_000,
);

test("on paper the charts are ink on white also where the screen is dark, and nothing stands there to be pressed", async () => {
  const { page, close } = await openPage(browser, `${chain.url}/watch?last=900`, { theme: "dark" });
  await settled(page);
  expect(await page.locator("html").getAttribute("data-theme")).toBe("dark");
  await page.evaluate("dispatchEvent(new Event('beforeprint'))");
  await page.emulateMedia({ media: "print" });
  expect(await page.locator("html").getAttribute("data-theme")).toBe("light");
  expect(await page.getByRole("button", { name: /Table|Stop|earlier|Arrange|too$/ }).count()).toBe(0);
  expect(await wordsOf(lane(page, "bq-410").locator(".value"))).toMatch(/\d/);
  await page.evaluate("dispatchEvent(new Event('afterprint'))");
  await eventually("dark again", async () => (await page.locator("html").getAttribute("data-theme")) === "dark");
  await close();
});

test("on a narrow screen the views stand behind one button, which opens and closes by the keyboard", async () => {
  const { page, close } = await openPage(browser, `${chain.url}/alarms`, { width: 420 });
  await settled(page);
  const menu = page.getByRole("button", { name: /^Alarms\s*: all views$/ });
  await menu.press("Enter");
  await page.getByRole("link", { name: "Limits" }).waitFor();
  await page.keyboard.press("Escape");
  expect(await page.getByRole("link", { name: "Limits" }).isVisible()).toBe(false);
  await menu.press("Enter");
  await page.getByRole("link", { name: "Limits" }).press("Enter");
  await page.waitForURL(/\/limits/);
  await page.getByRole("button", { name: /^Limits\s*: all views$/ }).waitFor();
  await close();
});

test("a view that cannot be fetched says so, with the way on, and the others still open", async () => {
  const { page, close } = await openPage(browser, "about:blank");
  await page.route(/limits-view-.*\.js/, (route) => route.abort());
  await page.goto(`${chain.url}/limits`);
  await page.getByText("Limits could not be fetched").waitFor();
  await page.getByRole("link", { name: "Plant" }).click();
  await page.getByRole("heading", { name: "Plant" }).waitFor();
  await close();
});
