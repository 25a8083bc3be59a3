import { writeFileSync } from "node:fs";
import { join } from "node:path";
import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { conditionsAt, makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { signInAs, user } from "../people.ts";
import { accessFaults, openBrowser, openPage, wordsOf } from "./browser.ts";

/* Forty minutes of one stream; results of the laboratory come in on the screen, and are corrected and withdrawn there. */
const plant = makePlant(1);
const stream = "bq-305";
const minute = 60_000;
/** here the plant moves little within a minute */
const start = Date.UTC(2026, 1, 27, 14);
const at = (minutes: number) => start + minutes * minute;
const water = (minutes: number) => 100 * conditionsAt(plant, stream, at(minutes)).composition.water;
/** as a person types it: in February the plant is on UTC */
const typed = (minutes: number) => new Date(at(minutes)).toISOString().slice(0, 16).replace("T", " ");

let chain: Chain;
let browser: Browser;
let page: Page;
const path = () => `${chain.url}/agreement/${stream}?property=water&days=365`;

async function open(name: string, look: Parameters<typeof openPage>[2] = {}): Promise<Page> {
  const { page } = await openPage(browser, path(), look);
  await signInAs(page, name);
  await page.getByRole("heading", { name: "Agreement" }).waitFor();
  return page;
}

beforeAll(async () => {
  [chain, browser] = await Promise.all([startChain(), openBrowser()]);
  for (let i = 0; i < 40 * 6; i++) {
    const time = start + i * 10_000;
    await chain.publish(stream, { time, sequence: i, values: Array.from(spectrumAt(plant, stream, time)) });
  }
  await user(chain, ["add", "E. Penn", "--role", "engineer"]);
  await user(chain, ["add", "O. Quill", "--role", "operator"]);
  page = await open("E. Penn");
}, 90_000);
afterAll(async () => {
  await browser?.close();
  await chain?.stop();
  chain?.remove();
});

async function enter(minutes: number, value: string, unit: string, sample: string): Promise<void> {
  const form = page.getByRole("form", { name: "Enter a result" });
  await form.getByLabel("Property").selectOption("water");
  await form.getByLabel(/^Sample drawn at/).fill(typed(minutes));
  await form.getByLabel("Value").fill(value);
  await form.getByLabel("Unit").fill(unit);
  await form.getByLabel("Sample's name").fill(sample);
  await form.getByRole("button", { name: "Enter it" }).click();
}
const row = (sample: string) => page.locator("mill-lab-row", { hasText: sample });

describe("results of the laboratory", () => {
  test("before there are any, the view says how they come in", async () => {
    await page.getByText("No pair counts yet: results of the laboratory come in by form").waitFor();
  });

  test("are entered, and answered with what was predicted", async () => {
    await enter(5, water(5).toFixed(2), "wt%", "first");
    await page.getByText(/^1 result taken\. Predicted: \d/).waitFor();
    await row("first").waitFor();
    expect(await wordsOf(row("first").locator("article"))).toMatch(
      /laboratory \d\.\d+.wt% predicted \d\.\d+.wt% difference −?\d\.\d+.wt%/,
    );
    await page.getByText("1 pair counts; 14 more make a first judgement.").waitFor();
  });

  test("in a wrong unit, or without a number or a time, are refused in words, and what was typed stays", async () => {
    await enter(6, "3.6", "ppm", "wrong");
    await page.getByText(/unit of water is "ppm", expected "wt%"\. Nothing is converted/).waitFor();
    expect(await page.getByLabel("Sample's name").inputValue()).toBe("wrong");
    await enter(6, "3,6", "wt%", "wrong");
    await page.getByText("Not taken. “3,6” is no number. Write it with a point, as 7.25.").waitFor();
    expect(await row("wrong").count()).toBe(0);
  });

  test("come in as a table: whole, or not at all with each wrong row named", async () => {
    const line = (minutes: number, sample: string, unit = "wt%") =>
      `${new Date(at(minutes)).toISOString()},water,${water(minutes).toFixed(2)},${unit},titration,${sample}`;
    const file = join(chain.folder, "results.csv");
    const send = async (lines: string[]) => {
      writeFileSync(file, ["time,property,value,unit,method,sample", ...lines].join("\n"));
      await page.getByLabel(/^Import a table/).setInputFiles(file);
    };
    const good = Array.from({ length: 18 }, (_, i) => line(8 + 1.5 * i, `table-${i}`));
    await send([...good, line(9, "bad", "g/L")]);
    await page.getByText("Nothing was taken: 1 of 19 rows cannot be.").waitFor();
    await page.getByRole("cell", { name: /unit of water is "g\/L"/ }).waitFor();
    expect(await row("table-").count()).toBe(0);
    await send(good);
    await page.getByText("18 results taken.").waitFor();
    await row("table-0").waitFor();
    await page.getByRole("heading", { name: "Statistics" }).waitFor();
    await page.getByText(/\d+ pairs; e = predicted − laboratory/).waitFor();
  });

  test("are corrected with a reason: what it was stays to be seen, with who", async () => {
    const value = (water(5) + 0.05).toFixed(2);
    await row("first").getByText("Correct or withdraw").click();
    const form = row("first").getByRole("form", { name: "Correct" });
    await form.getByLabel(/^Right value/).fill(value);
    await form.getByLabel("Why it is corrected").fill("Burette misread.");
    await form.getByRole("button", { name: "Correct it" }).click();
    await row("first")
      .getByText(/corrected \(it was \d\.\d+.wt%\) by E\. Penn, .*: Burette misread\./)
      .waitFor();
    expect(await wordsOf(row("first").locator("article"))).toContain(`laboratory ${Number(value).toFixed(3)}`);
  });

  test("are withdrawn with a reason: struck through, and counted no more", async () => {
    await row("table-0").first().getByText("Correct or withdraw").click();
    const form = row("table-0").first().getByRole("form", { name: "Withdraw" });
    await form.getByLabel("Why it is withdrawn").fill("Bottle broken.");
    await form.getByRole("button", { name: "Withdraw it" }).click();
    await page.getByText(/withdrawn by E\. Penn, .*: Bottle broken\./).waitFor();
    await page.getByText(/^Not counted: .*1 withdrawn/).waitFor();
  });

  test("an operator enters results, but is offered neither table nor correction", async () => {
    const operator = await open("O. Quill");
    await operator.getByText("Tables are brought in, and results corrected or withdrawn, by an engineer.").waitFor();
    await operator.locator("mill-lab-row").first().waitFor();
    expect(await operator.getByText("Correct or withdraw").count()).toBe(0);
    expect(await operator.getByLabel(/^Import a table/).count()).toBe(0);
  });

  test("what comes in by message stands on the screen without a touch", async () => {
    const result = {
      time: at(37),
      property: "water",
      value: Number(water(37).toFixed(2)),
      unit: "wt%",
      sample: "by-wire",
    };
    await chain.publishRaw(`millrace/brindle-quay/${stream}/lab`, JSON.stringify(result));
    await row("by-wire").waitFor();
  });
});

test.each([
  ["light", 1280],
  ["dark", 1280],
  ["light", 420],
] as const)("the view holds for everybody: %s, %i wide", async (theme, width) => {
  const seen = await open("E. Penn", { theme, width });
  await seen.locator("mill-inner-map").first().waitFor();
  await seen.locator("mill-lab-row").getByText("Correct or withdraw").first().click();
  expect(await accessFaults(seen)).toEqual([]);
  const [inside, whole] = await seen.evaluate<[number, number]>(
    "[document.documentElement.clientWidth, document.documentElement.scrollWidth]",
  );
  expect(whole).toBeLessThanOrEqual(inside);
  await eventually("the charts", async () => (await seen.locator("mill-pair-chart canvas").count()) >= 3);
});
