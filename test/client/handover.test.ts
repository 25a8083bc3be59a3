import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Shifts } from "../../core/messages/index.ts";
import { recordFile } from "../../server/handover/record-file.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { account, alarmEvent, begin, hour, record, shift } from "../core/handover/some-record.ts";
import { signInAs, user } from "../people.ts";
import { accessFaults, openBrowser, openPage, wordsOf } from "./browser.ts";

let chain: Chain;
let browser: Browser;
let at: string;
beforeAll(async () => {
  chain = await startChain({ historyDays: 1.5 });
  await eventually("the history", () => chain.printed().includes("days are on record"), 60_000);
  const { before } = await chain.get<Shifts>("/shifts?before=1");
  at = new Date(before[0].from).toISOString();
  browser = await openBrowser();
});
afterAll(async () => {
  await browser.close();
  await chain.stop();
  chain.remove();
});

const paper = (page: Page) => wordsOf(page.locator("mill-shift-record article"));

async function sign(page: Page, side: "outgoing" | "incoming", name: string, password: string): Promise<void> {
  const form = page.locator("form").filter({ has: page.getByRole("button", { name: `Sign as the ${side} side` }) });
  await form.first().getByLabel("Name").fill(name);
  await form.first().getByLabel("Password, again").fill(password);
  await form.first().getByRole("button").click();
}

test("a shift is read, written to, signed, asked about, taken over, and amended, all on the screen", async () => {
  const { page, complaints, close } = await openPage(browser, `${chain.url}/handover?at=${at}`);
  await page.getByText("Not handed over: nobody has signed this shift.").waitFor();
  expect(await paper(page)).toMatch(/Column overhead bq-201.*Ethanol .* on average/);
  // The invented people and their passwords stand where they are needed.
  expect(await wordsOf(page.locator("mill-shift-signing p").last())).toMatch(/R\. Quill, password quill-hands-over/);

  await page.getByLabel("Note about").selectOption({ label: "Recycled blend" });
  await page.getByLabel("Note", { exact: true }).fill("Drum 4 <b>leaks</b> a little.");
  await page.getByRole("button", { name: "Add the note" }).click();
  await page.locator("mill-shift-record").getByText("Drum 4 <b>leaks</b> a little.").waitFor();
  await page.getByLabel("Action for the next shift").fill("Empty drum 4");
  await page.getByLabel("Owner").fill("the next shift");
  await page.getByRole("button", { name: "Add the action" }).click();
  await page
    .getByRole("button", { name: /^Close action/ })
    .first()
    .waitFor();
  await page.getByRole("button", { name: /^Done ?: Reference spectrum/ }).click();
  await page.getByRole("button", { name: /^Undo ?: Reference spectrum/ }).waitFor();

  await sign(page, "outgoing", "R. Quill", "not the password");
  await page.getByRole("alert").getByText("This name and password do not belong together.").waitFor();
  await sign(page, "outgoing", "R. Quill", "quill-hands-over");
  await page.locator("mill-shift-record").getByText("nobody has taken the shift over yet").waitFor();

  await page.getByLabel("Ask the outgoing side, or object").fill("Which pump?");
  await page.getByRole("button", { name: "Ask" }).click();
  await page.getByLabel(/Answer to the question/).fill("The small one.");
  await page.getByRole("button", { name: "Answer" }).click();
  await page.locator("mill-shift-record").getByText("The small one.").waitFor();

  await sign(page, "incoming", "R. Quill", "quill-hands-over");
  await page.getByRole("alert").getByText("the incoming side is another person").waitFor();
  await sign(page, "incoming", "T. Marsh", "marsh-takes-over");
  await page.locator("mill-shift-record").getByText("taken over by T. Marsh").waitFor();
  expect(await paper(page)).toMatch(/SHA-256 of the signed record: [0-9a-f]{64}/);

  await page.getByLabel("Note", { exact: true }).fill("The leak was the lid.");
  await page.getByRole("button", { name: "Add the note" }).click();
  await page.locator("mill-shift-record").getByText("Amendments, after both had signed").waitFor();
  expect(await paper(page)).toMatch(/The leak was the lid\. R\. Quill/);

  await page.getByRole("searchbox").fill("lid");
  await page.getByRole("button", { name: "Search" }).click();
  await page.locator("mill-said-list").getByText("“lid”: said 1 time.").waitFor();
  expect(await wordsOf(page.locator("mill-said-list li"))).toMatch(/R\. Quill, note: The leak was the lid\./);
  // A wrong password and a signature that was refused are answers of the server, which the browser logs.
  expect(complaints.filter((each) => !/status of 40[19]/.test(each))).toEqual([]);
  await close();
});

describe("on the screen", () => {
  test.each([
    ["light", 1280],
    ["dark", 1280],
    ["light", 420],
    ["dark", 420],
  ] as const)("axe-core finds nothing, %s at %i px, and nothing is wider than the screen", async (theme, width) => {
    const { page, complaints, close } = await openPage(browser, `${chain.url}/handover`, { theme, width });
    await page.locator("mill-shift-record h1").waitFor();
    expect(await accessFaults(page)).toEqual([]);
    expect(await page.evaluate("document.documentElement.scrollWidth - innerWidth")).toBeLessThanOrEqual(0);
    expect(complaints).toEqual([]);
    await close();
  });
});

/** How many pages Chromium makes of what is on the page. */
async function pagesOf(page: Page, format: "A4" | "Letter"): Promise<number> {
  const pdf = await page.pdf({ format });
  return pdf.toString("latin1").match(/\/Type\s*\/Page\b/g)?.length ?? 0;
}

describe("on paper", () => {
  test.each(["A4", "Letter"] as const)(
    "%s: the view prints the record alone, without what steers the screen",
    async (format) => {
      const { page, close } = await openPage(browser, `${chain.url}/handover?at=${at}`);
      await page.locator("mill-shift-record h1").waitFor();
      await page.emulateMedia({ media: "print" });
      for (const steering of ["mill-top-bar", "mill-shift-writing", "mill-shift-signing", "footer"]) {
        expect([steering, await page.locator(steering).first().isVisible()]).toEqual([steering, false]);
      }
      expect(await page.locator("mill-shift-record").isVisible()).toBe(true);
      expect(await pagesOf(page, format)).toBeLessThanOrEqual(2);
      await close();
    },
  );

  const trend = {
    ...{ property: "ethanol", unit: "wt%", target: [88, 94.5] as [number, number], gaps: [] },
    time: Array.from({ length: 144 }, (_, i) => begin + (i * 12 * hour) / 144),
    value: Array.from({ length: 144 }, (_, i) => 91 + Math.sin(i / 9)),
    verdict: Array.from({ length: 144 }, () => "inside" as const),
  };
  const streams = (count: number) =>
    Array.from({ length: count }, (_, i) => ({
      ...{ stream: `s-${i + 1}`, name: `Stream number ${i + 1}`, account: account(), before: account(), trend },
    }));

  test.each([
    ["A4", 3],
    ["Letter", 3],
    ["A4", 12],
    ["Letter", 12],
  ] as const)("a quiet shift fits on one page: %s, %i streams", async (format, count) => {
    const { page, close } = await openPage(browser, "about:blank");
    const bound = { record: record({ streams: streams(count) }), hash: null, entries: [] };
    await page.setContent(recordFile(bound, "html"));
    expect(await pagesOf(page, format)).toBe(1);
    await close();
  });

  test("a shift of many alarms takes the pages that it needs, and hides none", async () => {
    const alarmEvents = Array.from({ length: 120 }, (_, i) =>
      alarmEvent(begin + i * 300_000, "raised", { key: `a-${i}`, title: `Alarm number ${i}` }),
    );
    const bound = { record: record({ alarmEvents }), hash: null, entries: [] };
    const { page, close } = await openPage(browser, "about:blank");
    await page.setContent(recordFile(bound, "html"));
    expect(await pagesOf(page, "A4")).toBeGreaterThan(2);
    const words = await wordsOf(page.locator("article"));
    for (const i of [0, 60, 119]) expect(words).toContain(`Alarm number ${i}`);
    await close();
  });
});

test("what analyzers and people send is never taken for markup in an exported page", async () => {
  const nasty = `<img src=x onerror="document.title='taken'">`;
  const note = {
    number: 1,
    shift: shift.from,
    at: begin,
    by: nasty,
    kind: "note" as const,
    about: { kind: "shift" as const },
    says: nasty,
  };
  const bound = {
    record: record({
      entries: [note],
      refused: [{ stream: null, reason: "malformed", says: nasty, count: 1, first: begin, last: begin }],
    }),
    hash: null,
    entries: [note],
  };
  const { page, close } = await openPage(browser, "about:blank");
  await page.setContent(recordFile(bound, "html"));
  expect(await page.locator("img").count()).toBe(0);
  expect(await wordsOf(page.locator("article"))).toContain(nasty);
  await close();
});

// Last: from the first person on somebody must sign in.
test("who only looks finds the record, and nothing to write or sign with", async () => {
  await user(chain, ["add", "V. Lark", "--role", "viewer"]);
  const { page, close } = await openPage(browser, `${chain.url}/handover?at=${at}`);
  await signInAs(page, "V. Lark");
  await page.getByText("V. Lark may read here. Writing and signing need an operator.").waitFor();
  expect(await page.locator("mill-shift-signing, mill-shift-writing, mill-shift-work").count()).toBe(0);
  await close();
});
