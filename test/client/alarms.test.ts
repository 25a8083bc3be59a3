import { type Browser, chromium, type Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { makePlant, type PlantStreamId, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { findChromium } from "../chromium.ts";
import { signInAs, user } from "../people.ts";

const plant = makePlant(1);
let chain: Chain;
let browser: Browser;
let page: Page;
let time = Date.now() - 60_000;

/** Readings that the model never saw: three of them raise the alarm, three healthy ones clear it. */
async function publish(stream: PlantStreamId, odd: boolean, count = 3): Promise<void> {
  for (let i = 0; i < count; i++) {
    time += 100;
    const values = Array.from(
      spectrumAt(plant, stream, time),
      (value, j) => value + (odd && j > 200 && j < 230 ? 0.1 : 0),
    );
    await chain.publish(stream, { time, sequence: time, values });
  }
}

const card = (stream: string, title: string) =>
  page
    .locator("section.card")
    .filter({ has: page.getByRole("heading", { name: stream }), hasText: title })
    .first();

beforeAll(async () => {
  chain = await startChain();
  await user(chain, ["add", "E. Penn", "--role", "engineer"]);
  browser = await chromium.launch({ executablePath: findChromium(), args: ["--no-sandbox", "--disable-gpu"] });
  page = await browser.newPage();
  await page.goto(`${chain.url}/alarms`);
  await signInAs(page, "E. Penn");
});
afterAll(async () => {
  await browser?.close();
  await chain.stop();
  chain.remove();
});

test("several alarms that were each ticked are acknowledged together", async () => {
  await publish("bq-305", true);
  await publish("bq-201", true);
  await page.getByLabel("Choose Recycled blend: Unfamiliar spectrum").check();
  await page.getByLabel("Choose Column overhead: Unfamiliar spectrum").check();
  await page.getByRole("button", { name: "Acknowledge the 2 chosen" }).click();
  await card("Recycled blend", "Unfamiliar spectrum")
    .getByText(/acknowledged[\s\S]*E\. Penn/)
    .waitFor();
  await card("Column overhead", "Unfamiliar spectrum")
    .getByText(/acknowledged[\s\S]*E\. Penn/)
    .waitFor();
});

test("a shelved alarm needs its reason, stands on the list of what is set aside, and comes back by hand", async () => {
  const alarm = card("Recycled blend", "Unfamiliar spectrum");
  await alarm.getByText("Shelve for a while").click();
  await alarm.getByRole("button", { name: "Shelve" }).click();
  expect(await page.getByText("Set aside: these say nothing at present").count()).toBe(0); // no reason, not sent
  await alarm.getByLabel("Reason").first().fill("a trial with another solvent");
  await alarm.getByLabel("For").selectOption("30");
  await alarm.getByRole("button", { name: "Shelve" }).click();
  await page.getByText("Set aside: these say nothing at present").waitFor();
  await page
    .getByText(/E\. Penn: a trial with another solvent/)
    .first()
    .waitFor();
  await page.getByText(/Its condition holds all the same/).waitFor();
  await page.getByRole("button", { name: "Unshelve" }).click();
  await card("Recycled blend", "Unfamiliar spectrum").getByText("not acknowledged").waitFor(); // annunciated anew
});

test("one that is shelved for this time only comes back when its condition has gone", async () => {
  const alarm = card("Recycled blend", "Unfamiliar spectrum");
  await alarm.getByText("Shelve for a while").click();
  await alarm.getByLabel("Reason").first().fill("known");
  await alarm.getByRole("button", { name: "Shelve" }).click();
  await page.getByText("Set aside: these say nothing at present").waitFor();
  await publish("bq-305", false);
  await page.getByText("Set aside: these say nothing at present").waitFor({ state: "detached" });
});

test("an engineer takes one out of service and returns it", async () => {
  const alarm = card("Column overhead", "Unfamiliar spectrum");
  await alarm.getByText("Take out of service").click();
  await alarm.getByLabel("Reason").last().fill("probe removed");
  await alarm.getByRole("button", { name: "Take it out" }).click();
  await page.getByText(/Out of service since[\s\S]*E\. Penn: probe removed/).waitFor();
  await page.getByRole("button", { name: "Return to service" }).click();
  await card("Column overhead", "Unfamiliar spectrum").waitFor();
});

test("the record is filtered by stream and by what it is about", async () => {
  const rows = page.locator("section.record table tbody tr");
  await page.getByLabel("What", { exact: true }).selectOption("signed");
  await eventually("sign-ins only", async () => {
    const texts = await rows.allTextContents();
    return texts.length > 0 && texts.every((text) => text.includes("signed in")) && texts.length;
  });
  await page.getByLabel("What", { exact: true }).selectOption("alarm");
  await page.getByLabel("Stream", { exact: true }).selectOption("bq-201");
  await eventually("alarms of one stream only", async () => {
    const texts = await rows.allTextContents();
    return texts.length > 0 && texts.every((text) => text.includes("bq-201") && text.includes("alarm"));
  });
});

test("the alarm system's own figures stand beside the published ones, with their source", async () => {
  await page.getByRole("button", { name: "Count again" }).click();
  const figures = page.getByRole("region", { name: "Figures" });
  await figures.getByText("Alarms per 10 minutes, mean").waitFor();
  expect(await figures.getByText(/ISA-18\.2/).count()).toBeGreaterThan(3);
  await page.getByText("By priority").waitFor();
});
