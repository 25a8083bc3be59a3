import { execFileSync } from "node:child_process";
import { closeSync, cpSync, mkdtempSync, openSync, rmSync, writeSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import Database from "better-sqlite3";
import { expect, test } from "vitest";
import { eventually, startChain } from "../chain.ts";
import { everyOneRecorded, startLoad } from "./load.ts";

const full = process.env.MILLRACE_FULL === "1";

/** A small file system in memory; undefined where this user may mount none. */
function smallDisk(megabytes: number): { folder: string; fill: () => string; remove: () => void } | undefined {
  const folder = mkdtempSync(join(tmpdir(), "millrace-disk-"));
  try {
    execFileSync("mount", ["-t", "tmpfs", "-o", `size=${megabytes}m`, "tmpfs", folder], { stdio: "pipe" });
  } catch {
    rmSync(folder, { recursive: true });
    return undefined;
  }
  return {
    folder,
    fill() {
      const file = join(folder, "filler");
      const handle = openSync(file, "w");
      try {
        for (const size of [65_536, 4096]) {
          const block = Buffer.alloc(size, 1);
          try {
            for (;;) writeSync(handle, block);
          } catch (error) {
            if ((error as NodeJS.ErrnoException).code !== "ENOSPC") throw error;
          }
        }
      } finally {
        closeSync(handle);
      }
      return file;
    },
    remove() {
      execFileSync("umount", [folder]);
      rmSync(folder, { recursive: true });
    },
  };
}

const disk = smallDisk(64);

test.skipIf(!disk)(
  "a full disk stops the acknowledgements and says so; freed again it goes on by itself, and nothing that was acknowledged is missing",
  async () => {
    const { folder, fill, remove } = disk!;
    const made = await startChain();
    await made.stop();
    cpSync(made.folder, folder, { recursive: true });
    made.remove();
    const chain = await startChain({ folder });
    const load = await startLoad(chain.brokerUrl, Date.now() - 3_600_000);
    await eventually("readings", () => load.acknowledged.length > 100);

    for (let round = 0; round < (full ? 5 : 1); round++) {
      const filler = fill();
      let last = -1;
      await eventually(
        "no more acknowledgements",
        async () => {
          const before = last;
          last = load.acknowledged.length;
          await new Promise((resolve) => setTimeout(resolve, 1500));
          return before === load.acknowledged.length;
        },
        30_000,
      );
      rmSync(filler);
      await eventually("acknowledgements again", () => load.acknowledged.length > last + 50, 30_000);
    }
    await load.stop();
    await everyOneRecorded(chain.url, load.acknowledged);
    await eventually("ready", async () => (await fetch(`${chain.url}/readyz`)).status === 200);
    console.log(`disk full: ${load.acknowledged.length} acknowledged, all on record`);
    expect(await chain.stop()).toBe(0);
    remove();
  },
  full ? 600_000 : 120_000,
);

test("a record that another process has locked is said to be so, and everything is there once it is let go", async () => {
  const chain = await startChain();
  const load = await startLoad(chain.brokerUrl, Date.now() - 3_600_000);
  await eventually("readings", () => load.acknowledged.length > 100);
  const other = new Database(join(chain.folder, "record.db"));
  other.exec("BEGIN IMMEDIATE");
  const before = load.acknowledged.length;
  const why = await eventually(
    "not ready, and why",
    async () => {
      const answer = await fetch(`${chain.url}/readyz`);
      return answer.status === 503 ? ((await answer.json()) as { why: string[] }).why : undefined;
    },
    30_000,
  );
  expect(why.join()).toMatch(/The record cannot be written \(database is locked\)\. Nothing is lost/);
  // The inbox is another file: publishers go on being answered.
  expect(load.acknowledged.length).toBeGreaterThan(before);
  other.exec("ROLLBACK");
  other.close();
  await eventually("ready", async () => (await fetch(`${chain.url}/readyz`)).status === 200, 30_000);
  await load.stop();
  await everyOneRecorded(chain.url, load.acknowledged);
  expect(await chain.stop()).toBe(0);
  chain.remove();
});
