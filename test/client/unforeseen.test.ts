import type { Browser } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { analyzerAxis, makePlant, spectrumAt, unforeseenBand } from "../../simulator/plant/index.ts";
import { type Chain, eventually, startChain } from "../chain.ts";
import { accessFaults, lane, openBrowser, openPage, type Seen, wordsOf } from "./browser.ts";

/*
 * The main job, end to end, with nothing replaced: a spectrum goes in over MQTT, a judged prediction comes out on the screen. The analyzer is
 * played here, so that the moment at which something unforeseen appears in its spectra is known.
 */
const plant = makePlant(1);
const stream = "bq-305";
let chain: Chain;
let browser: Browser;
let seen: Seen;
let sequence = 0;
let sending: ReturnType<typeof setInterval> | undefined;
let band: Float64Array | undefined;

/** One reading of the recycled blend as it is now, with the unforeseen band on top while there is one. */
async function publish(): Promise<void> {
  const time = Date.now();
  const values = Array.from(spectrumAt(plant, stream, time), (value, index) => value + (band?.[index] ?? 0));
  sequence += 1;
  await chain.publish(stream, { time, sequence, values, axis: analyzerAxis });
}

beforeAll(async () => {
  [chain, browser] = await Promise.all([startChain(), openBrowser()]);
  seen = await openPage(browser, `${chain.url}/watch?last=900`);
}, 120_000);

afterAll(async () => {
  clearInterval(sending);
  await browser?.close();
  await chain?.stop();
  chain?.remove();
});

test("a stream that has sent nothing says so and shows no number", async () => {
  const blend = lane(seen.page, stream);
  await blend.getByText("No reading yet").waitFor();
  expect(await wordsOf(blend.locator("mill-lane-number .value"))).toBe("—");
});

test("a reading that goes in over MQTT comes out as a number with its uncertainty, and changes as readings come", async () => {
  sending = setInterval(() => void publish().catch(() => {}), 1000);
  const value = lane(seen.page, stream).locator("mill-lane-number .value");
  await eventually("a number with ±", async () => /^\d+\.\d ± \d/.test(await wordsOf(value)));
  expect(await wordsOf(value)).toMatch(/^\d\d\.\d ± 0\.\d\u2009wt%$/);
  await lane(seen.page, stream).getByText("inside", { exact: true }).waitFor();
  const stamp = () => value.getAttribute("title");
  const before = await stamp();
  await eventually("a newer reading", async () => (await stamp()) !== before, 5000);
});

test("an unforeseen band makes the lane unfamiliar: no ± any more, the last trusted number under it, and an alarm that says what to do", async () => {
  band = unforeseenBand();
  const blend = lane(seen.page, stream);
  await blend.locator(".verdict", { hasText: "unfamiliar since" }).waitFor();
  expect(await wordsOf(blend.locator("mill-lane-number .value"))).not.toContain("±");
  expect(await wordsOf(blend.locator(".trusted"))).toMatch(/Last inside: \d\d\.\d ± 0\.\d\u2009wt% at/);
  const alarm = blend.locator("mill-alarm-card");
  await alarm.getByText("Unfamiliar spectrum").waitFor();
  const words = await wordsOf(alarm.locator("article"));
  expect(words).toMatch(/Q [\d.]+ × limit/);
  expect(words).toContain("Take a grab sample");
  expect(words).toContain("not acknowledged");
  expect(await seen.page.locator("mill-top-bar .counts").textContent()).toMatch(/1 high, 1 not acknowledged/);
});

test("the Reading view names the wavelengths of the band", async () => {
  const other = await openPage(browser, `${chain.url}/reading/${stream}`);
  await other.page.locator(".verdict", { hasText: "unfamiliar" }).waitFor();
  const says = await wordsOf(other.page.locator(".says"));
  // The band stands at 1880 nm and is 22 nm wide: the region that is named first must hold it.
  const [from, to] = [...says.replace(/(\d)\s(?=\d)/g, "$1").matchAll(/(\d+)–(\d+) nm/g)][0].slice(1).map(Number);
  expect(from).toBeLessThan(1880 + 44);
  expect(to).toBeGreaterThan(1880 - 44);
  expect(other.complaints).toEqual([]);
  await other.close();
});

test("the Reading view steps from one excursion to the next, and to none where there is none", async () => {
  const other = await openPage(browser, `${chain.url}/reading/${stream}`);
  await other.page.getByRole("link", { name: "◂ excursion" }).click();
  await other.page.waitForURL(/at=/);
  const { excursions } = await chain.get<{ excursions: { start: number }[] }>(`/excursions?stream=${stream}`);
  expect(other.page.url()).toContain(new Date(excursions[0].start).toISOString());
  await other.page.locator(".verdict", { hasText: "unfamiliar" }).waitFor();
  await eventually("no earlier one", () => other.page.getByRole("button", { name: "◂ excursion" }).isDisabled());
  await other.close();
});

test("a screen reader is told of the alarm without asking, once", async () => {
  const spoken = await wordsOf(seen.page.getByRole("alert").filter({ hasText: "alarm:" }));
  expect(spoken).toContain("high alarm: Recycled blend: Unfamiliar spectrum. Take a grab sample");
  expect(spoken.split("Unfamiliar spectrum")).toHaveLength(2);
  // The other two streams have sent nothing, and may have raised alarms of their own by now.
  expect(await seen.page.title()).toMatch(/^\([123]\) Watch · Brindle Quay$/);
});

test.each(["/watch?last=900", "/alarms", `/reading/${stream}`])(
  "axe-core finds no fault on %s in either theme while something is doubted and an alarm is open",
  async (path) => {
    for (const theme of ["light", "dark"] as const) {
      const other = await openPage(browser, chain.url + path, { theme });
      await other.page
        .getByText(/unfamiliar/i)
        .first()
        .waitFor();
      await other.page.waitForTimeout(1000);
      expect(await accessFaults(other.page)).toEqual([]);
      await other.close();
    }
  },
);

test("shelved with a reason it says nothing but stands on the list with the way back, and comes back", async () => {
  const other = await openPage(browser, `${chain.url}/alarms`);
  const { page } = other;
  // The two other streams have never sent anything here, and their alarms say so.
  const card = page.locator("mill-alarm-card article", { hasText: "Unfamiliar spectrum" });
  await card.getByText("Shelve for a while").click();
  await card.getByLabel("Reason").fill("Grab sample is under way");
  await card.getByRole("combobox").selectOption({ label: "30 min" });
  await card.getByRole("button", { name: "Shelve" }).click();
  const row = page.locator("mill-set-aside-row article", { hasText: "Unfamiliar spectrum" });
  await row.waitFor();
  expect(await wordsOf(row)).toMatch(
    /Shelved until \d\d:\d\d \((30|29) min\), R\. Quill: Grab sample is under way\. Its condition holds all the same/,
  );
  expect(await card.count()).toBe(0);
  await lane(seen.page, stream).getByText("1 alarm set aside").waitFor();
  expect(await accessFaults(page)).toEqual([]);
  await row.getByRole("button", { name: "Unshelve" }).click();
  await card.waitFor();
  expect(other.complaints).toEqual([]);
  await other.close();
});

test("acknowledging it puts the person's name to it", async () => {
  const alarm = lane(seen.page, stream).locator("mill-alarm-card");
  await alarm.getByRole("button", { name: "Acknowledge" }).click();
  await alarm.getByText("R. Quill").waitFor();
  expect(await wordsOf(alarm.locator("article"))).toMatch(/acknowledged\s+\d\d:\d\d, R\. Quill/);
  expect(await alarm.getByRole("button", { name: "Acknowledge" }).count()).toBe(0);
});

test("whoever knows says what the excursion was, and it is kept under their name", async () => {
  const other = await openPage(browser, `${chain.url}/excursions/${stream}`);
  const row = other.page.getByRole("row", { name: /unfamiliar/ }).first();
  await row.getByRole("combobox").selectOption("process change");
  await row.getByText(/R\. Quill/).waitFor();
  await other.page.reload();
  await row.getByText(/R\. Quill/).waitFor();
  expect(await row.getByRole("combobox").inputValue()).toBe("process change");
  await row.getByText("Add a note").click();
  await row.getByLabel(/^Note on the excursion/).fill("Tank 4 was switched in at 14:02.");
  await row.getByRole("button", { name: "Keep" }).click();
  await row.getByText(/R\. Quill.*: Tank 4 was switched in at 14:02\./).waitFor();
  expect(await accessFaults(other.page)).toEqual([]);
  await other.close();
});

test("when the band is gone the lane returns to normal and the alarm leaves", async () => {
  band = undefined;
  const blend = lane(seen.page, stream);
  await blend.getByText("inside", { exact: true }).waitFor();
  await blend.getByText("No open alarms.").waitFor({ timeout: 30_000 });
  expect(await wordsOf(blend.locator("mill-lane-number .value"))).toContain("±");
});

test("when the analyzer falls silent, the lane says so with the age within 5 s of the reading that was due, and its number looks old", async () => {
  clearInterval(sending);
  await publish();
  const last = Date.now();
  const blend = lane(seen.page, stream);
  await blend.locator(".age").waitFor({ timeout: 10_000 });
  // A reading is due every 2 s: due 2 s after the last, said 5 s later at the most.
  expect(Date.now() - last).toBeLessThan(2000 + 5000);
  expect(await wordsOf(blend.locator(".age"))).toMatch(/As of \d\d:\d\d:\d\d, \d+ s old: silent for \d+ s/);
  expect(await wordsOf(blend.locator("mill-lane-number .value"))).not.toContain("±");
  expect(await blend.locator("mill-lane-number .old").count()).toBe(1);
  expect(await accessFaults(seen.page)).toEqual([]);
});

test("a message that cannot be used stands on the Plant view with its reason", async () => {
  await chain.publish(stream, { time: Date.now(), sequence: 1_000_000, values: [1, 2, 3], axis: analyzerAxis });
  await seen.page.getByRole("link", { name: "Plant" }).click();
  const refused = seen.page.getByRole("region", { name: "Refused lately" });
  await refused.getByText(`millrace/brindle-quay/${stream}/reading`).first().waitFor();
  expect(await wordsOf(refused)).toContain("301");
});

test("the page has complained of nothing in all that time", () => {
  expect(seen.complaints).toEqual([]);
});
