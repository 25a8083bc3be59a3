import { readdirSync, readFileSync } from "node:fs";
import { gzipSync } from "node:zlib";
import { expect, test } from "vitest";
import { dist } from "../program.ts";

const folder = `${dist}client/assets/`;
const sizes = readdirSync(folder)
  .filter((name) => /\.(js|css)$/.test(name))
  .map((name) => ({ name, bytes: gzipSync(readFileSync(folder + name)).length }));

const sum = (files: typeof sizes) => files.reduce((total, { bytes }) => total + bytes, 0);

test("what Watch needs comes over the network in less than 120 kB; with every other view it is below 130 kB", () => {
  const others = sizes.filter(({ name }) => name.includes("-view-") && !name.startsWith("watch-view-"));
  expect(sum(sizes) - sum(others), JSON.stringify(sizes)).toBeLessThan(120_000);
  expect(sum(sizes), JSON.stringify(sizes)).toBeLessThan(130_000);
});

test("each view is a file of its own, and what stands before all of them is small", () => {
  const views = sizes.filter(({ name }) => name.includes("-view-"));
  expect(views.length).toBeGreaterThanOrEqual(6);
  const shell = sizes.find(({ name }) => /^index-.*\.js$/.test(name));
  expect(shell?.bytes).toBeLessThan(30_000);
});
