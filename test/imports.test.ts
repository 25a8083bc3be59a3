import { readdirSync, readFileSync } from "node:fs";
import { join, relative, resolve } from "node:path";
import { expect, test } from "vitest";

const root = resolve(import.meta.dirname, "..");
/** Who may import whom: client, server and simulator stand on core, and core on nothing of ours. */
const allowed: Record<string, string[]> = {
  core: ["core"],
  server: ["server", "core"],
  client: ["client", "core"],
  simulator: ["simulator", "core"],
};

function sources(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true, recursive: true })
    .filter((entry) => entry.isFile() && entry.name.endsWith(".ts"))
    .map((entry) => join(entry.parentPath, entry.name));
}

function imports(file: string): string[] {
  const text = readFileSync(file, "utf8");
  return [...text.matchAll(/(?:from|import)\s*\(?\s*["']([^"']+)["']/g)].map(([, target]) => target);
}

function roomOf(path: string): string {
  return relative(root, path).split("/")[0];
}

const files = Object.keys(allowed).flatMap((room) => sources(join(root, room)));

test("imports point downward only", () => {
  expect(files.length).toBeGreaterThan(100);
  const upward = files.flatMap((file) =>
    imports(file)
      .filter((target) => target.startsWith("."))
      .filter((target) => !allowed[roomOf(file)].includes(roomOf(resolve(file, "..", target))))
      .map((target) => `${relative(root, file)} imports ${target}`),
  );
  expect(upward).toEqual([]);
});

test("another folder of core is entered by its index only", () => {
  const roomInCore = (path: string) => relative(root, path).split("/").slice(0, 2).join("/");
  const aside = files.flatMap((file) =>
    imports(file)
      .filter((target) => target.startsWith("."))
      .map((target) => resolve(file, "..", target))
      .filter((target) => roomOf(target) === "core" && roomInCore(target) !== roomInCore(file))
      .filter((target) => !target.endsWith("/index.ts") && !target.endsWith("core/errors.ts"))
      .map((target) => `${relative(root, file)} imports ${relative(root, target)}`),
  );
  expect(aside).toEqual([]);
});

// That core touches neither Node nor a page, its own tsconfig.json sees to: it has no types for either.
test("core asks no clock and no chance", () => {
  const forbidden = /\bMath\.random\b|\bDate\.now\b|\bnew Date\(\)/;
  const impure = sources(join(root, "core")).filter((file) => forbidden.test(readFileSync(file, "utf8")));
  expect(impure.map((file) => relative(root, file))).toEqual([]);
});
