import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { type Chain, startChain } from "../chain.ts";
import { serve } from "../serve.ts";
import { accessFaults, lane, openBrowser, openPage, wordsOf } from "./browser.ts";

/* The first day of a plant: nothing was ever received, and one of the models cannot be used. */
let chain: Chain;
let served: Awaited<ReturnType<typeof serve>>;
let browser: Browser;
let page: Page;

beforeAll(async () => {
  chain = await startChain();
  await chain.stop();
  const plant = JSON.parse(readFileSync(join(chain.folder, "plant.json"), "utf8"));
  writeFileSync(join(chain.folder, "broken.model.json"), "{}");
  plant.streams[0].model = "broken.model.json";
  plant.data = "first-day";
  plant.http.port = 0;
  plant.mqtt.broker.embedded.port = 0;
  const config = join(chain.folder, "first-day.json");
  writeFileSync(config, JSON.stringify(plant));
  [served, browser] = await Promise.all([serve(config), openBrowser()]);
  ({ page } = await openPage(browser, served.url));
  await lane(page, "bq-410").waitFor();
});
afterAll(async () => {
  await browser?.close();
  await served?.stop();
  chain?.remove();
});

test("Watch: a stream without a usable model says why and what to do, one without readings what is awaited", async () => {
  expect(await wordsOf(lane(page, "bq-201").locator(".whole-lane"))).toMatch(
    /Column overhead.*broken\.model\.json.*expected/,
  );
  await lane(page, "bq-410")
    .getByText(/^No reading yet\. One is due every .* from the analyzer\.$/)
    .waitFor();
  await lane(page, "bq-410").getByText("No readings in this stretch.").waitFor();
  expect(await accessFaults(page)).toEqual([]);
});

test.each([
  ["/reading/bq-410", /No reading|no reading/],
  ["/excursions", /No excursion|no excursion|Nothing/],
  ["/watch/nothing-here", /There is no stream nothing-here in this plant\. Show all streams/],
])("%s is empty in words", async (path, words) => {
  await page.goto(served.url + path);
  await page.getByText("link up", { exact: true }).waitFor();
  await page.locator("main > :not(p)").first().waitFor();
  await page.locator("main").getByText(words).first().waitFor();
});
