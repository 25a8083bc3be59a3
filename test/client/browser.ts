import axe from "axe-core";
import { type Browser, chromium, type Locator, type Page } from "playwright-core";
import { findChromium } from "../chromium.ts";

const quietly = [
  "--no-sandbox",
  "--disable-gpu",
  "--disable-quic",
  "--no-first-run",
  "--disable-background-networking",
  "--disable-component-update",
  "--disable-sync",
];

export function openBrowser(): Promise<Browser> {
  return chromium.launch({ executablePath: findChromium(), args: quietly });
}

export interface Seen {
  page: Page;
  /** what the page complained of: console errors and warnings, uncaught errors */
  complaints: string[];
  close: () => Promise<void>;
}

/** A fresh page in a context of its own (its own storage). */
export async function openPage(
  browser: Browser,
  url: string,
  { theme = "light", width = 1280, height = 800 }: { theme?: "light" | "dark"; width?: number; height?: number } = {},
): Promise<Seen> {
  const context = await browser.newContext({ viewport: { width, height }, colorScheme: theme });
  const page = await context.newPage();
  page.setDefaultTimeout(15_000);
  const complaints: string[] = [];
  page.on("console", (message) => {
    if (message.type() === "error" || message.type() === "warning") complaints.push(message.text());
  });
  page.on("pageerror", (error) => complaints.push(String(error)));
  await page.goto(url);
  return { page, complaints, close: () => context.close() };
}

/** What axe-core finds against WCAG 2.2 A and AA, one line a fault. Evaluated by the browser's debugger, so the page's own policy stays in force. */
export async function accessFaults(page: Page): Promise<string[]> {
  await page.evaluate(axe.source);
  const { violations } = await page.evaluate(async () => {
    const run = (globalThis as unknown as { axe: typeof axe }).axe;
    return run.run({ runOnly: ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa", "best-practice"] });
  });
  return violations.flatMap(({ id, help, nodes }) =>
    nodes.map((node) => `${id}: ${help}: ${node.target.join(" ")} ${node.failureSummary ?? ""}`),
  );
}

/** The lane of a stream on Watch. */
export function lane(page: Page, stream: string) {
  return page.locator("mill-watch-lane", { hasText: stream });
}

/** The words of an element as they stand on the screen, line breaks and runs of spaces as one space. */
export async function wordsOf(element: Locator): Promise<string> {
  const words = await element.evaluate((each) => {
    // biome-ignore lint/performance/useDomNodeTextContent: the words that are seen; what is hidden does not count
    const { innerText } = each as unknown as { innerText: string };
    return innerText;
  });
  return words.replace(/[ \n\u00a0]+/g, " ").trim();
}
