import { readFileSync } from "node:fs";
import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Trend } from "../../core/messages/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { accessFaults, lane, openBrowser, openPage, type Seen, wordsOf } from "./browser.ts";
import { cuttableLink } from "./cuttable-link.ts";

/* The screens on the real chain with its own simulator and a day of recorded history. */
let chain: Chain;
let browser: Browser;
let seen: Seen;
/** opened while the history was still being brought in */
let early: Seen;
const hour = 3_600_000;

beforeAll(async () => {
  [chain, browser] = await Promise.all([startChain({ simulate: "calm", historyDays: 1 }), openBrowser()]);
  early = await openPage(browser, `${chain.url}/watch?last=28800`);
  await eventually(
    "a day of history",
    async () => {
      const to = Date.now();
      const trend = await chain.get<Trend>(
        `/streams/bq-410/trend?from=${to - 24 * hour}&to=${to - 2 * 60_000}&points=100`,
      );
      return trend.time.length > 50 && trend.time[0] < to - 23 * hour && (trend.time.at(-1) ?? 0) > to - hour;
    },
    60_000,
  );
  seen = await openPage(browser, `${chain.url}/watch?last=3600`);
  await lane(seen.page, "bq-410").getByText("inside", { exact: true }).waitFor();
}, 120_000);

afterAll(async () => {
  await browser?.close();
  await chain?.stop();
  chain?.remove();
});

/** What the URL says of the window, once it has settled. */
async function windowInUrl(): Promise<URLSearchParams> {
  await new Promise((resolve) => setTimeout(resolve, 600));
  return new URL(seen.page.url()).searchParams;
}

async function middleOf(stream: string): Promise<{ x: number; y: number }> {
  const box = await lane(seen.page, stream).locator("mill-lane-chart .u-over").boundingBox();
  if (!box) throw new Error(`the chart of ${stream} is not on the screen`);
  return { x: box.x + box.width / 2, y: box.y + box.height / 3 };
}

describe("Watch", () => {
  test("shows a lane for each stream, each with a number, its unit and its verdict in words", async () => {
    for (const stream of ["bq-201", "bq-305", "bq-410"]) {
      const value = lane(seen.page, stream).locator("mill-lane-number .value");
      await eventually(`a number for ${stream}`, async () => /^[\d.]+ ± [\d.]+\u2009wt%$/.test(await wordsOf(value)));
    }
  });

  test("a screen that was opened while history was brought in fills up by itself", async () => {
    const blend = lane(early.page, "bq-305");
    await blend.getByRole("button", { name: "Table of Recycled blend" }).click();
    await eventually("eight hours without a gap", async () =>
      /\(8 h\).*no gaps/.test(await wordsOf(blend.locator("caption").first())),
    );
    expect(early.complaints).toEqual([]);
    await early.close();
  });

  test("says the chart in a sentence, and gives it as a table on demand", async () => {
    const blend = lane(seen.page, "bq-305");
    const sentence = await blend.locator("mill-lane-chart .plot").getAttribute("aria-label");
    expect(sentence).toMatch(/Recycled blend\. Ethyl acetate, .* \(1 h\): between [\d.]+ and [\d.]+\u2009wt%/);
    await blend.getByRole("button", { name: "Table of Recycled blend" }).click();
    const table = blend.getByRole("region", { name: "Table of Recycled blend" });
    expect(await table.locator("tbody tr").count()).toBeGreaterThan(20);
    expect(await wordsOf(table.locator("tbody tr").first())).toMatch(/^\d\d:\d\d:\d\d\s[\d.]+( ± [\d.]+)?\u2009wt%/);
    await blend.getByRole("button", { name: "Table of Recycled blend" }).click();
  });

  test("draws another property when it is chosen, and remembers the choice", async () => {
    const blend = lane(seen.page, "bq-305");
    await blend.getByRole("button", { name: /^Water/ }).click();
    await blend.locator(".caption", { hasText: "Water, wt%" }).waitFor();
    await seen.page.reload();
    await blend.locator(".caption", { hasText: "Water, wt%" }).waitFor();
    await blend.getByRole("button", { name: /^Ethyl acetate/ }).click();
  });

  test("pointing at one lane puts the cursor on the same moment in all, with the values at it", async () => {
    const { x, y } = await middleOf("bq-201");
    await seen.page.mouse.move(x, y);
    const stamps = await Promise.all(
      ["bq-201", "bq-305", "bq-410"].map(async (stream) => {
        const caption = lane(seen.page, stream).locator(".caption .at");
        const words = await eventually(`values at the cursor in ${stream}`, async () => {
          const text = await wordsOf(caption);
          return /^\d\d:\d\d:\d\d .*wt%.* × limit$/.test(text) ? text : "";
        });
        const [hours, minutes, seconds] = words.slice(0, 8).split(":").map(Number);
        return hours * 3600 + minutes * 60 + seconds;
      }),
    );
    // History has a reading every 30 s: the nearest one of each lane.
    expect(Math.max(...stamps) - Math.min(...stamps)).toBeLessThanOrEqual(60);
    await seen.page.mouse.move(5, 5);
  });

  test("the wheel shows less time and stays live; dragging into the past is unmistakably not live, and there is a way back", async () => {
    const { x, y } = await middleOf("bq-305");
    await seen.page.mouse.move(x, y);
    await seen.page.mouse.wheel(0, -100);
    expect(Number((await windowInUrl()).get("last"))).toBe(2880);
    await seen.page.getByText("Live · last reading").waitFor();
    await seen.page.mouse.down();
    await seen.page.mouse.move(x + 150, y, { steps: 5 });
    await seen.page.mouse.up();
    await seen.page.getByText("Trends are not live: stopped at").waitFor();
    const past = await windowInUrl();
    const [from, to] = ["from", "to"].map((name) => Date.parse(past.get(name) ?? ""));
    expect(to - from).toBeCloseTo(2_880_000, -3);
    expect(Date.now() - to).toBeGreaterThan(5 * 60_000);
    await seen.page.getByRole("button", { name: "Back to live" }).click();
    await seen.page.getByText("Live · last reading").waitFor();
    expect((await windowInUrl()).get("last")).toBe("2880");
  });

  test("a day fits on the screen: the trend comes in intervals that keep minimum and maximum", async () => {
    const asked = seen.page.waitForResponse((response) => response.url().includes("bq-201/trend"));
    await seen.page.getByRole("button", { name: "24 h" }).click();
    const trend = (await (await asked).json()) as Trend;
    expect(trend.whole).toBe(false);
    const { min, max } = trend.properties["ethanol"];
    expect(min.some((low, index) => (low as number) < (max[index] as number))).toBe(true);
  });

  test("the keyboard alone moves the cursor, pans, zooms and opens the reading", async () => {
    await seen.page.goto(`${chain.url}/watch?last=3600`);
    const plot = lane(seen.page, "bq-305").locator("mill-lane-chart .plot");
    await plot.focus();
    await seen.page.keyboard.press("PageUp");
    await seen.page.getByText("Trends are not live").waitFor();
    await seen.page.keyboard.press("+");
    const at = await windowInUrl();
    const [from, to] = ["from", "to"].map((name) => Date.parse(at.get(name) ?? ""));
    expect(to - from).toBeCloseTo(1_800_000, -3);
    for (let press = 0; press < 10; press++) await seen.page.keyboard.press("ArrowLeft");
    const caption = lane(seen.page, "bq-305").locator(".caption .at");
    await eventually("values at the cursor", async () => /× limit$/.test(await wordsOf(caption)));
    await seen.page.keyboard.press("Enter");
    await seen.page.locator("mill-reading-view .says").waitFor();
    const opened = Date.parse((await windowInUrl()).get("at") ?? "");
    expect(opened).toBeGreaterThan(from);
    expect(opened).toBeLessThan(to);
  });
});

describe("Reading", () => {
  test("a click on a trend opens the reading at that moment, steps to its neighbours, and leads back to Watch at that time", async () => {
    await seen.page.goto(`${chain.url}/watch?last=3600`);
    await lane(seen.page, "bq-201").getByText("inside", { exact: true }).waitFor();
    const { x, y } = await middleOf("bq-201");
    await seen.page.mouse.click(x, y);
    const stamp = seen.page.locator("mill-reading-view .head b");
    await stamp.waitFor();
    const first = await wordsOf(stamp);
    expect(await seen.page.locator("mill-reading-view mill-spectrum-panel").count()).toBe(6);
    await seen.page.getByRole("link", { name: "◂ previous" }).click();
    await eventually("the reading before", async () => (await wordsOf(stamp)) !== first);
    await seen.page.getByRole("link", { name: "next ▸" }).click();
    await eventually("the first again", async () => (await wordsOf(stamp)) === first);
    await seen.page.getByRole("link", { name: "Show on Watch" }).click();
    await seen.page.getByText("Trends are not live").waitFor();
  });

  test("is handed over as a CSV file with a row for every channel", async () => {
    await seen.page.goto(`${chain.url}/reading/bq-305`);
    const [file] = await Promise.all([
      seen.page.waitForEvent("download"),
      seen.page.getByRole("button", { name: "Save as CSV" }).click(),
    ]);
    expect(file.suggestedFilename()).toMatch(/^bq-305 \d{4}-\d\d-\d\dT\d\d-\d\d-\d\dZ\.csv$/);
    const lines = readFileSync(await file.path(), "utf8")
      .trimEnd()
      .split("\r\n");
    expect(lines).toHaveLength(1 + 301);
    expect(lines[1]).toMatch(/^1000,0\.\d+/);
  });

  test("is copied as the same CSV, where the browser has a clipboard", async () => {
    await seen.page.context().grantPermissions(["clipboard-read", "clipboard-write"]);
    await seen.page.getByRole("button", { name: "Copy as CSV" }).click();
    await seen.page.getByText("Copied.").waitFor();
    const text = await seen.page.evaluate("navigator.clipboard.readText()");
    expect(String(text).trimEnd().split("\n")).toHaveLength(1 + 301);
    expect(String(text)).toMatch(/^axis \(nm\),reading,.*,part of ethyl acetate,part of ethanol,part of water\r?\n/);
  });

  test("is saved as a PNG that holds every chart", async () => {
    const [file] = await Promise.all([
      seen.page.waitForEvent("download"),
      seen.page.getByRole("button", { name: "Save picture" }).click(),
    ]);
    expect(file.suggestedFilename()).toMatch(/^bq-305 .*Z\.png$/);
    const png = readFileSync(await file.path());
    expect(png.subarray(1, 4).toString()).toBe("PNG"); // ISO/IEC 15948: signature, then IHDR with width and height
    const [width, height] = [png.readUInt32BE(16), png.readUInt32BE(20)];
    const charts = await seen.page
      .locator("mill-spectrum-panel canvas")
      .evaluateAll((all) =>
        all
          .map((each) => each as unknown as { width: number; height: number })
          .map(({ width: w, height: h }) => [w, h]),
      );
    expect(charts).toHaveLength(6);
    expect(width).toBeGreaterThan(charts[0][0]);
    expect(height).toBeGreaterThan(charts.reduce((sum, [, h]) => sum + h, 0));
  });

  test("takes the prediction of each property apart, region by region", async () => {
    const titles = seen.page.locator("mill-reading-view .panels h2");
    expect(await titles.last().textContent()).toMatch(/^What makes ethyl acetate, wt%/);
    await seen.page.getByLabel("Take apart").selectOption("water");
    await eventually("water", async () => /^What makes water, wt%/.test((await titles.last().textContent()) ?? ""));
    const row = seen.page
      .locator(".facts")
      .getByRole("row", { name: /^Water/ })
      .last();
    expect(await wordsOf(row)).toMatch(/\d–[\d\s]+ nm: [\d.]+\s%/);
  });

  test("shows T² and Q beside their limits, and the place among the calibration samples", async () => {
    await seen.page.goto(`${chain.url}/reading/bq-410`);
    const facts = seen.page.locator("mill-reading-view .facts");
    await facts.getByRole("row", { name: /^T² \(amounts\)/ }).waitFor();
    expect(await wordsOf(facts.getByRole("row", { name: /^Q \(shape\)/ }))).toMatch(/10⁻|\d/);
    expect(await facts.locator("mill-place-map .plot").getAttribute("aria-label")).toMatch(
      /T² ratio [\d.]+, Q ratio [\d.]+, among \d+ calibration samples/,
    );
  });
});

describe("every view", () => {
  const paths = ["/watch?last=900", "/reading/bq-305", "/excursions", "/alarms", "/plant"];

  for (const theme of ["light", "dark"] as const) {
    test.each(paths)(`%s has no fault that axe-core finds, in ${theme}, and complains of nothing`, async (path) => {
      const other = await openPage(browser, chain.url + path, { theme });
      await other.page.getByRole("heading", { level: 1 }).first().waitFor({ state: "attached" });
      await other.page.waitForTimeout(1000);
      expect(await other.page.evaluate("document.documentElement.dataset.theme")).toBe(theme);
      expect(await accessFaults(other.page)).toEqual([]);
      expect(other.complaints).toEqual([]);
      await other.close();
    });
  }

  test("the theme can be chosen against the system's, and is kept", async () => {
    const other = await openPage(browser, `${chain.url}/alarms`);
    await other.page.getByLabel("Light or dark").selectOption("dark");
    await other.page.reload();
    await other.page.getByRole("heading", { level: 1 }).waitFor();
    expect(await other.page.evaluate("document.documentElement.dataset.theme")).toBe("dark");
    await other.close();
  });

  test("the caution and the word that the plant is invented are in sight", async () => {
    for (const path of paths) {
      await seen.page.goto(chain.url + path);
      await seen.page.locator("footer", { hasText: "Not a safety function" }).waitFor();
      await seen.page.getByText("demo: invented plant").waitFor();
    }
  });

  test("a stream that does not exist is told, with a way on", async () => {
    await seen.page.goto(`${chain.url}/reading/bq-999`);
    await seen.page.getByText("There is no stream bq-999").waitFor();
    await seen.page.goto(`${chain.url}/watch/bq-999`);
    await seen.page.getByText("There is no stream bq-999").waitFor();
    await seen.page.getByRole("link", { name: "Show all streams" }).first().click();
    await lane(seen.page, "bq-201").waitFor();
  });

  test("nothing was complained of so far", () => {
    expect(seen.complaints).toEqual([]);
  });
});

describe("what goes wrong beside the link", () => {
  test("a computer whose clock is off is told so, and its ages follow the server's clock", async () => {
    const other = await openPage(browser, "about:blank");
    await other.page.addInitScript("{ const real = Date.now; Date.now = () => real() - 61_000; }");
    await other.page.goto(`${chain.url}/watch?last=900`);
    await other.page
      .locator(".trouble", { hasText: /This computer's clock is 1 min( 1 s)? behind the server's/ })
      .waitFor({ timeout: 5000 });
    const value = lane(other.page, "bq-201").locator("mill-lane-number .value");
    await eventually("a number that is not old", async () => (await wordsOf(value)).includes("±"));
    const clock = await wordsOf(other.page.locator("mill-top-bar .clock b"));
    const [hours, minutes] = clock.split(":").map(Number);
    const plantNow = new Date().toLocaleTimeString("en-GB", { timeZone: "Europe/London", hourCycle: "h23" });
    const [realHours, realMinutes] = plantNow.split(":").map(Number);
    expect(Math.abs((hours - realHours) * 60 + minutes - realMinutes) % 1439).toBeLessThanOrEqual(1);
    await other.close();
  });

  test("a trend that the server refuses is told in its words, and read when it can be", async () => {
    const other = await openPage(browser, "about:blank");
    let refuse = true;
    await other.page.route(/bq-201\/trend/, (route) =>
      refuse
        ? route.fulfill({
            status: 503,
            json: { code: "store", says: "The record is being repaired. Try again in a minute." },
          })
        : route.continue(),
    );
    await other.page.goto(`${chain.url}/watch?last=900`);
    const words = lane(other.page, "bq-201").getByText(
      "The trend could not be read. The record is being repaired. Try again in a minute.",
    );
    await words.waitFor();
    refuse = false;
    await words.waitFor({ state: "detached", timeout: 10_000 });
    await other.close();
  });

  test("before the plant has been read there is no number on the screen, but a sentence", async () => {
    const other = await openPage(browser, "about:blank");
    let refuse = true;
    await other.page.route("**/api/v1/plant", (route) => (refuse ? route.abort() : route.continue()));
    await other.page.goto(`${chain.url}/watch`);
    await other.page.getByText("The plant could not be read.").waitFor();
    await other.page.getByText("Watch the process by other means.").waitFor();
    refuse = false;
    await lane(other.page, "bq-201").waitFor({ timeout: 10_000 });
    await other.close();
  });
});

describe("when the link breaks", () => {
  const streams = ["bq-201", "bq-305", "bq-410"];

  async function everythingLooksOld(page: Page): Promise<void> {
    for (const stream of streams) {
      const number = lane(page, stream).locator("mill-lane-number");
      expect(await wordsOf(number.locator(".value"))).not.toContain("±");
      expect(await wordsOf(number.locator(".age"))).toMatch(/As of \d\d:\d\d:\d\d, .* old: link to the server lost/);
    }
    expect(await wordsOf(page.locator("mill-range-bar .bar"))).toContain("Not live: link lost");
    expect(await wordsOf(page.locator("mill-top-bar header"))).toContain("link lost");
  }

  async function liveNumber(page: Page): Promise<void> {
    const value = lane(page, "bq-201").locator("mill-lane-number .value");
    await eventually("a live number", async () => (await wordsOf(value)).includes("±"));
  }

  test.each(["cut", "deaden"] as const)(
    "%s: the screen says so within 5 s and every number looks old; mended, it is live again and the trend has no hole",
    async (how) => {
      const link = await cuttableLink(chain.url);
      const other = await openPage(browser, `${link.url}/watch?last=900`);
      await liveNumber(other.page);
      const broken = Date.now();
      link[how]();
      await other.page
        .locator(".trouble", { hasText: /Link to the server lost \d+ s ago/ })
        .waitFor({ timeout: 10_000 });
      expect(Date.now() - broken).toBeLessThan(5000);
      await everythingLooksOld(other.page);
      await new Promise((resolve) => setTimeout(resolve, 4000));
      link.mend();
      await liveNumber(other.page);
      expect(await other.page.getByText("Link to the server lost").count()).toBe(0);
      // The readings that came meanwhile are read again: the table has one about every 2 s across the break.
      await lane(other.page, "bq-201").getByRole("button", { name: "Table of Column overhead" }).click();
      const caption = lane(other.page, "bq-201").locator("caption").first();
      await eventually("the stretch of the break filled in", async () => /no gaps/.test(await wordsOf(caption)));
      await other.close();
      await link.close();
    },
  );

  // The last one: it takes the server away.
  test("the server stops: said within 5 s, and every number looks old", async () => {
    await seen.page.goto(`${chain.url}/watch?last=900`);
    await liveNumber(seen.page);
    const stopped = Date.now();
    const gone = chain.stop();
    await seen.page.locator(".trouble", { hasText: /Link to the server lost \d+ s ago/ }).waitFor({ timeout: 10_000 });
    expect(Date.now() - stopped).toBeLessThan(5000);
    await gone;
    await everythingLooksOld(seen.page);
  });
});
