import { readdirSync, readFileSync, rmSync } from "node:fs";
import { gzipSync } from "node:zlib";
import { connectAsync } from "mqtt";
import type { Browser, CDPSession, Page } from "playwright-core";
import { makePlant, type PlantStreamId, spectrumAt } from "../../simulator/plant/index.ts";
import { openBrowser, openPage } from "../client/browser.ts";
import type { BenchResult } from "./bench-result.ts";
import { type ManyStreams, serveMany } from "./many-streams.ts";

const liveMs = 120_000;
const settleMs = 10_000;
const screen = { width: 1920, height: 1080 };
/** tall enough that every lane of twelve is on the screen */
const tallScreen = { width: 1920, height: 3200 };
const assets = new URL("../../client/assets/", import.meta.url);

/** The screens in the real browser: forty streams live, a day of twelve streams opened and moved, and what has to be fetched before. */
export async function benchScreens(): Promise<BenchResult[]> {
  const browser = await openBrowser();
  try {
    return [...benchBundle(), ...(await benchDay(browser)), ...(await benchLive(browser))];
  } finally {
    await browser.close();
  }
}

function benchBundle(): BenchResult[] {
  const zipped = readdirSync(assets)
    .filter((name) => /\.(js|css)$/.test(name))
    .reduce((sum, name) => sum + gzipSync(readFileSync(new URL(name, assets))).length, 0);
  const value = zipped / 1000;
  return [{ name: "client, every view, gzipped", value, unit: "kB", wanted: "< 120", good: value < 120 }];
}

async function withService(
  make: () => Promise<ManyStreams>,
  bench: (many: ManyStreams) => Promise<BenchResult[]>,
): Promise<BenchResult[]> {
  const many = await make();
  try {
    return await bench(many);
  } finally {
    await many.served.stop();
    rmSync(many.folder, { recursive: true, force: true });
  }
}

/** Twelve streams with a reading every 5 s for 24 h: Watch is opened from another view, dragged and zoomed. */
function benchDay(browser: Browser): Promise<BenchResult[]> {
  const day = { spanMs: 24 * 3_600_000, everyMs: 5000 };
  return withService(
    () => serveMany(12, 5000, day),
    async ({ served }) => {
      const { page } = await openPage(browser, `${served.url}/plant`, tallScreen);
      await page.getByText("link up", { exact: true }).waitFor();
      await page.waitForTimeout(settleMs / 2);
      const opened: number[] = [];
      for (let i = 0; i < 3; i++) {
        opened.push(await timeToWatch(page));
        await page.getByRole("link", { name: "Plant" }).click();
        await page.waitForTimeout(500);
      }
      await timeToWatch(page);
      const box = (await page.locator("mill-lane-chart .u-over").first().boundingBox())!;
      const [x, y] = [box.x + box.width * 0.7, box.y + 60];
      const drag = await framesWhile(page, async () => {
        await page.mouse.move(x, y);
        await page.mouse.down();
        for (let step = 0; step < 120; step++) {
          await page.mouse.move(x - 4 * step, y);
          await page.waitForTimeout(8);
        }
        await page.mouse.up();
      });
      const zoom = await framesWhile(page, async () => {
        for (let step = 0; step < 60; step++) {
          await page.mouse.wheel(0, step % 20 < 10 ? -60 : 60);
          await page.waitForTimeout(25);
        }
      });
      const value = opened.sort((a, b) => a - b)[1];
      return [
        {
          name: "Watch opened, 24 h of 12 streams, all lanes drawn",
          value,
          unit: "ms",
          wanted: "< 1000",
          good: value < 1000,
        },
        { name: "panning it by dragging", value: drag, unit: "f/s", wanted: "≥ 50", good: drag >= 50 },
        { name: "zooming it by the wheel", value: zoom, unit: "f/s", wanted: "≥ 50", good: zoom >= 50 },
      ];
    },
  );
}

/** From the click on Watch until every lane has drawn its trend, ms. */
function timeToWatch(page: Page): Promise<number> {
  return page.evaluate(async () => {
    // biome-ignore lint/suspicious/noExplicitAny: runs in the page, whose types are not among those of Node
    const { document, requestAnimationFrame } = globalThis as any;
    const app = document.querySelector("mill-app").renderRoot;
    const link = app.querySelector("mill-top-bar").renderRoot.querySelector("mill-view-nav").renderRoot;
    const began = performance.now();
    // biome-ignore lint/suspicious/noExplicitAny: as above
    const watch: any = [...link.querySelectorAll("a")].find((each) => each.textContent === "Watch");
    watch.href = "/watch?last=86400";
    watch.click();
    const frame = () => new Promise((resolve) => requestAnimationFrame(resolve));
    const isDrawn = () => {
      const lanes = [...(app.querySelector("mill-watch-view")?.renderRoot?.querySelectorAll("mill-watch-lane") ?? [])];
      const labels = lanes.map((lane) => lane.renderRoot.querySelector("mill-lane-chart")?.label ?? "loading");
      return lanes.length > 0 && labels.every((label: string) => !/loading|no readings/.test(label));
    };
    while (!isDrawn()) await frame();
    await frame(); // the one that paints it
    return performance.now() - began;
  });
}

/** Frames a second while something is done. */
async function framesWhile(page: Page, act: () => Promise<void>): Promise<number> {
  await page.evaluate(() => {
    // biome-ignore lint/suspicious/noExplicitAny: runs in the page
    const here = globalThis as any;
    here.frames = { count: 0, began: performance.now(), on: true };
    const tick = () => {
      here.frames.count += 1;
      if (here.frames.on) here.requestAnimationFrame(tick);
    };
    here.requestAnimationFrame(tick);
  });
  await act();
  return page.evaluate(() => {
    // biome-ignore lint/suspicious/noExplicitAny: runs in the page
    const { frames } = globalThis as any;
    frames.on = false;
    return (1000 * frames.count) / (performance.now() - frames.began);
  });
}

/** Forty streams with a reading a second: how busy the page's main thread is, its longest frame, and whether its memory grows. */
function benchLive(browser: Browser): Promise<BenchResult[]> {
  return withService(
    () => serveMany(40, 1000),
    async ({ served, brokerUrl, streams }) => {
      const stop = await publishAll(brokerUrl, streams);
      const { page } = await openPage(browser, `${served.url}/watch?last=900`, screen);
      const session = await page.context().newCDPSession(page);
      await session.send("Performance.enable");
      await page.getByText("link up", { exact: true }).waitFor();
      await page.waitForTimeout(settleMs);
      await watchFrames(page);
      const before = await measure(session);
      await page.waitForTimeout(liveMs);
      const longest = await longestFrame(page);
      const after = await measure(session);
      await stop();
      const busy = (100 * (after.busySeconds - before.busySeconds)) / (after.at - before.at);
      const grown = (after.heapBytes - before.heapBytes) / 1e6;
      return [
        { name: "40 streams live: main thread busy", value: busy, unit: "%", wanted: "< 25", good: busy < 25 },
        { name: "40 streams live: longest frame", value: longest, unit: "ms", wanted: "< 100", good: longest < 100 },
        { name: "40 streams live: heap grown in 2 min", value: grown, unit: "MB", wanted: "< 5", good: grown < 5 },
      ];
    },
  );
}

async function measure(session: CDPSession): Promise<{ at: number; busySeconds: number; heapBytes: number }> {
  await session.send("HeapProfiler.collectGarbage");
  const { metrics } = await session.send("Performance.getMetrics");
  const value = (name: string) => metrics.find((each) => each.name === name)?.value ?? Number.NaN;
  return { at: value("Timestamp"), busySeconds: value("TaskDuration"), heapBytes: value("JSHeapUsedSize") };
}

/** Frames that took longer than 50 ms from their first task to their paint are told by the browser. */
async function watchFrames(page: Page): Promise<void> {
  await page.evaluate(() => {
    // biome-ignore lint/suspicious/noExplicitAny: runs in the page
    const here = globalThis as any;
    here.longest = 0;
    new here.PerformanceObserver((list: { getEntries: () => { duration: number }[] }) => {
      for (const { duration } of list.getEntries()) here.longest = Math.max(here.longest, duration);
    }).observe({ type: "long-animation-frame" });
  });
}

async function longestFrame(page: Page): Promise<number> {
  // biome-ignore lint/suspicious/noExplicitAny: runs in the page
  return page.evaluate(() => (globalThis as any).longest);
}

/** A reading a second to every stream, spread over the second. Resolves with how to stop. */
async function publishAll(brokerUrl: string, streams: ManyStreams["streams"]): Promise<() => Promise<void>> {
  const client = await connectAsync(brokerUrl);
  const plant = makePlant(1);
  let sequence = 0;
  let next = 0;
  const timer = setInterval(() => {
    const { id, like } = streams[next];
    const time = Date.now();
    const values = Array.from(spectrumAt(plant, like as PlantStreamId, time));
    client.publish(`millrace/brindle-quay/${id}/reading`, JSON.stringify({ time, sequence, values }), { qos: 1 });
    next = (next + 1) % streams.length;
    if (next === 0) sequence += 1;
  }, 1000 / streams.length);
  return async () => {
    clearInterval(timer);
    await client.endAsync(true);
  };
}
