import { type Browser, chromium, type Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { type Chain, startChain } from "../chain.ts";
import { findChromium } from "../chromium.ts";
import { password, signInAs, user } from "../people.ts";

let chain: Chain;
let browser: Browser;
let page: Page;

beforeAll(async () => {
  chain = await startChain({ simulate: "calm" });
  expect(await user(chain, ["add", "O. Penn", "--role", "operator"])).toMatchObject({ code: 0 });
  browser = await chromium.launch({ executablePath: findChromium(), args: ["--no-sandbox", "--disable-gpu"] });
  page = await browser.newPage();
});
afterAll(async () => {
  await browser?.close();
  await chain.stop();
  chain.remove();
});

test("with people on the list the screens show nothing of the plant until somebody signs in", async () => {
  await page.goto(chain.url);
  await page.getByLabel("Name").waitFor();
  expect(await page.getByText("Column overhead").count()).toBe(0);
});

test("a wrong password is said, and the name stays", async () => {
  await page.getByLabel("Name").fill("O. Penn");
  await page.getByLabel("Password").fill("something else");
  await page.getByRole("button", { name: "Sign in" }).click();
  await page.getByText("This name and password do not belong together.").waitFor();
  expect(await page.getByLabel("Name").inputValue()).toBe("O. Penn");
});

test("the right one opens the view that the address asked for, under that name, live", async () => {
  await page.getByLabel("Password").fill(password);
  await page.getByRole("button", { name: "Sign in" }).click();
  await page.getByText("O. Penn").waitFor();
  await page.getByText("Column overhead").first().waitFor();
  await page.getByText("link up").waitFor();
});

test("who leaves sees no more of the plant within seconds", async () => {
  expect(await user(chain, ["leave", "O. Penn"])).toMatchObject({ code: 0 });
  await page.getByLabel("Name").waitFor();
  expect(await page.getByText("Column overhead").count()).toBe(0);
});

test("signing out brings the door back", async () => {
  expect(await user(chain, ["add", "S. Ecca", "--role", "viewer"])).toMatchObject({ code: 0 });
  await page.goto(chain.url);
  await signInAs(page, "S. Ecca");
  await page.getByRole("button", { name: "Sign out" }).click();
  await page.getByLabel("Name").waitFor();
});
