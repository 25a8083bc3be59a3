import type { Browser } from "playwright-core";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Shifts } from "../../core/messages/index.ts";
import { makePlant, spectrumAt } from "../../simulator/plant/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { lane, openBrowser, openPage, type Seen, wordsOf } from "./browser.ts";

/* Thirty days of one stream, a reading every ten minutes, one single reading of them unfamiliar: what each range of Watch shows of it. */
const plant = makePlant(1);
const minute = 60_000;
const day = 24 * 60 * minute;
const everyMs = 10 * minute;
const end = Math.floor(Date.now() / everyMs) * everyMs - everyMs;
const count = (30 * day) / everyMs - 12;
const spikeAt = end - Math.round(count / 3) * everyMs;
let chain: Chain;
let browser: Browser;
let seen: Seen;

beforeAll(async () => {
  [chain, browser] = await Promise.all([startChain(), openBrowser()]);
  const lines = Array.from({ length: count }, (_, n) => {
    const time = end - (count - 1 - n) * everyMs;
    const odd = time === spikeAt ? 0.1 : 0;
    const values = Array.from(spectrumAt(plant, "bq-410", time), (value, j) => value + (j > 200 && j < 230 ? odd : 0));
    return JSON.stringify({ time, sequence: n, values: values.map((value) => Number(value.toPrecision(7))) });
  });
  const answer = await fetch(`${chain.url}/api/v1/streams/bq-410/load`, {
    method: "POST",
    headers: { "content-type": "application/x-ndjson" },
    body: lines.join("\n"),
  });
  expect(await answer.json()).toMatchObject({ recorded: count });
  seen = await openPage(browser, `${chain.url}/watch/bq-410`);
  await lane(seen.page, "bq-410").waitFor();
}, 120_000);
afterAll(async () => {
  await browser?.close();
  await chain?.stop();
  chain?.remove();
});

const dryer = () => lane(seen.page, "bq-410");

/** Shares of the plotting area's width at which a pixel of a colour stands on the canvas. */
function placesOfColour([red, green, blue]: readonly [number, number, number]): Promise<number[]> {
  return dryer()
    .locator("mill-lane-chart canvas")
    .evaluate(
      (canvas, wanted) => {
        // biome-ignore lint/suspicious/noExplicitAny: the page's canvas; its types are not among those of Node
        const { width, height } = canvas as any;
        // biome-ignore lint/suspicious/noExplicitAny: as above
        const { data } = (canvas as any).getContext("2d").getImageData(0, 0, width, height);
        const [left, right] = [52, width - 104];
        const found = new Set<number>();
        for (let i = 0; i < width * height; i++) {
          if (wanted.every((part, c) => Math.abs(data[4 * i + c] - part) < 12))
            found.add(((i % width) - left) / (right - left));
        }
        return [...found].sort((a, b) => a - b);
      },
      [red, green, blue],
    );
}
/** --odd of the light theme: the colour of what is unfamiliar */
const odd = [0x7a, 0x3b, 0x9e] as const;

describe("one unfamiliar reading in thirty days", () => {
  test("is still seen, at its place and nowhere else", async () => {
    await seen.page.getByRole("button", { name: "30 d" }).click();
    const places = await eventually("the colour of doubt", async () => {
      const found = await placesOfColour(odd);
      return found.length > 0 ? found : undefined;
    });
    const expected = 1 - (Date.now() - spikeAt) / (30 * day);
    for (const place of places) expect(Math.abs(place - expected)).toBeLessThan(0.01);
  });

  test("is counted in the sentence that stands for the chart", async () => {
    await dryer().getByRole("button", { name: "Table of Dryer outlet" }).click();
    await eventually("the sentence", async () =>
      /\(30 d\).*1 (interval|reading) unfamiliar/.test(await wordsOf(dryer().locator("caption").first())),
    );
  });
});

describe("a result of the laboratory", () => {
  const sampleAt = spikeAt - 40 * everyMs;
  const lab = { property: "water", value: 0.42, unit: "wt%", method: "Karl Fischer" };

  beforeAll(async () => {
    const answer = await fetch(`${chain.url}/api/v1/streams/bq-410/lab`, {
      method: "POST",
      headers: { "content-type": "application/json" },
      body: JSON.stringify({ ...lab, time: new Date(sampleAt).toISOString() }),
    });
    expect(await answer.json()).toMatchObject({ done: true, accepted: 1 });
  });

  test("comes into the table of a trend that is on the screen, beside its prediction, by the time of the sample", async () => {
    const row = dryer().getByRole("row", { name: /Water 0\.42/ });
    await row.waitFor();
    expect(await wordsOf(row)).toMatch(/\d\d:\d\d:\d\d\s*Water\s*0\.42\u2009wt%\s*0\.\d+\u2009wt%/);
  });

  test("stands on the trend at its moment, and in words at the cursor", async () => {
    const box = (await dryer().locator("mill-lane-chart .u-over").boundingBox())!;
    const share = 1 - (Date.now() - sampleAt) / (30 * day);
    await seen.page.mouse.move(box.x + share * box.width, box.y + 40);
    await dryer().locator(".caption", { hasText: "lab 0.42" }).waitFor();
  });
});

describe("a range that is typed", () => {
  const typed = (at: number) => new Date(at).toISOString().slice(0, 16).replace("T", " ");

  test("stands in the address and is not live", async () => {
    const [from, to] = [spikeAt - 60 * minute, spikeAt + 60 * minute];
    await seen.page.getByRole("button", { name: "from … to" }).click();
    await seen.page.getByLabel("From").fill(typed(from));
    await seen.page.getByLabel("to", { exact: true }).fill(typed(to));
    await seen.page.getByRole("button", { name: "Show", exact: true }).click();
    await seen.page.getByText("Trends are not live:").waitFor();
    await eventually("the address", () =>
      seen.page
        .url()
        .endsWith(
          `from=${encodeURIComponent(new Date(from).toISOString()).replaceAll("%3A", ":")}&to=${new Date(to).toISOString()}`,
        ),
    );
  });

  test.each([
    ["yesterday", "now", "“yesterday” is no time here. Write it as 2026-12-01 14:05."],
    ["2026-01-01 10:00", "2026-01-01 09:00", "The end must be 1 min or more after the beginning."],
    ["2096-01-01", "2096-01-02", "That has not happened yet."],
  ])("from %s to %s is refused in words", async (from, to, words) => {
    const entry = seen.page.locator("mill-range-entry");
    if ((await entry.locator("form").count()) === 0) await seen.page.getByRole("button", { name: "from … to" }).click();
    await seen.page.getByLabel("From").fill(from);
    await seen.page.getByLabel("to", { exact: true }).fill(to);
    await seen.page.getByRole("button", { name: "Show", exact: true }).click();
    await entry
      .getByRole("alert")
      .filter({ hasText: words.slice(0, 20) })
      .waitFor();
    expect(await wordsOf(entry.getByRole("alert"))).toBe(words);
  });
});

test("this shift is shown from its beginning to now, live", async () => {
  const { current } = await chain.get<Shifts>("/shifts");
  await seen.page.getByRole("button", { name: "this shift" }).click();
  await seen.page.getByText(/^Live/).waitFor();
  await eventually("the address", () => seen.page.url().includes(`since=${new Date(current.from).toISOString()}`));
  expect(await seen.page.getByRole("button", { name: "this shift" }).getAttribute("aria-pressed")).toBe("true");
});
