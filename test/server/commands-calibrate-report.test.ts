import { readFileSync } from "node:fs";
import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { calibrateCommand } from "../../server/commands/calibrate.ts";
import { openBrowser, wordsOf } from "../client/browser.ts";
import { gasolineFiles } from "./gasoline-files.ts";
import { runCommand } from "./run-command.ts";

const files = gasolineFiles();
const report = files.path("report.html");
let browser: Browser;
let page: Page;
const heard: string[] = [];

beforeAll(async () => {
  // one wrong reference value, so that there is something to find
  const spoilt = files.rows.slice(0, 50).map((line, i) =>
    i === 20
      ? line
          .split(",")
          .map((cell, k) => (k === 1 ? Number(cell) + 1.5 : cell))
          .join(",")
      : line,
  );
  const words = [
    "--data",
    files.table("spoilt.csv", spoilt),
    "--test",
    files.test,
    "--property",
    "octane",
    "--unit",
    "octane=RON",
  ];
  const rest = [
    "--components",
    "3",
    "--exclude",
    "1",
    "2",
    "3",
    "4",
    "5",
    "6",
    "--notes",
    "<b>bold</b>",
    "--out",
    files.path("m.model.json"),
    "--report",
    report,
  ];
  expect((await runCommand(calibrateCommand(), [...words, ...rest])).error).toBeUndefined();
  browser = await openBrowser();
  page = await browser.newPage({ viewport: { width: 1280, height: 900 } });
  page.on("console", (message) => heard.push(message.text()));
  page.on("pageerror", (error) => heard.push(String(error)));
  page.on("request", (request) => heard.push(request.url()));
  await page.goto(`file://${report}`);
});
afterAll(async () => {
  await browser?.close();
  files.remove();
});

describe("the report of a calibration", () => {
  test("is one file that asks for nothing and runs nothing", () => {
    const asked = heard.filter((line) => !line.startsWith("data:font/"));
    expect(asked).toEqual([`file://${report}`]);
    expect(readFileSync(report, "utf8")).not.toMatch(/<script|https?:\/\/(?!www\.w3\.org)/);
  });

  test("has every picture, each with words for who cannot see it, and no figure that is none", async () => {
    const titles = await page.locator("figure h3").allTextContents();
    for (const title of [
      "Predicted against reference: octane",
      "Error over the range: octane",
      "Error of held-out samples: octane",
      "Explained variance",
      "Inner relation of component 1",
      "Score map, components 1 and 2",
      "Influence: T² and Q",
      "Influence: leverage and error of octane",
      "Samples and channels together (biplot)",
      "Calibration spectra as measured",
      "Regression coefficients of octane",
      "Importance of the channels (VIP)",
      "Weights, component 3",
      "Loadings, component 3",
    ]) {
      expect(titles).toContain(title);
    }
    expect(await page.locator("figure svg[aria-label]").count()).toBe(titles.length);
    const everything = (await page.content()).replace(/@font-face[^}]*}/g, "");
    expect(everything).not.toMatch(/NaN|undefined|Infinity|\[object/);
  });

  test("draws its curves inside the pictures", async () => {
    const outside = await page.locator("figure svg").evaluateAll((pictures) =>
      pictures.flatMap((picture) => {
        const frame = picture.getBoundingClientRect();
        return [...picture.querySelectorAll("circle, text.axis, text.label")]
          .map((mark) => mark.getBoundingClientRect())
          .filter(
            (mark) =>
              mark.left < frame.left - 1 ||
              mark.right > frame.right + 1 ||
              mark.top < frame.top - 1 ||
              mark.bottom > frame.bottom + 1,
          )
          .map(() => picture.getAttribute("aria-label"));
      }),
    );
    expect(outside).toEqual([]);
  });

  test("lists the sample with the wrong value, warns of the exclusions, and says what it is not", async () => {
    const text = await wordsOf(page.locator("main"));
    expect(text).toMatch(/21 .*(odd relation|large error): octane off by/);
    expect(text).toMatch(/Mind: 6 of 50 samples \(12 %\) were excluded/);
    expect(text).toMatch(/0\.9\d+/); // R²
    expect(text).toContain("<b>bold</b>"); // notes are text, never markup
    expect(text).toMatch(/Advisory: not a safety function/);
  });

  test("fits a laptop and a telephone without scrolling sideways, and prints", async () => {
    for (const width of [1280, 420]) {
      await page.setViewportSize({ width, height: 900 });
      expect(await page.evaluate<number>("document.documentElement.scrollWidth")).toBeLessThanOrEqual(width);
    }
    const pdf = await page.pdf({ format: "A4" });
    const pages = pdf.toString("latin1").match(/\/Type \/Page\b/g)?.length ?? 0;
    expect(pages).toBeGreaterThan(4);
    expect(pages).toBeLessThan(15);
  });
});
