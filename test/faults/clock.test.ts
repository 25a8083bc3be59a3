import { execFileSync } from "node:child_process";
import { existsSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { expect, test } from "vitest";
import { eventually, startChain } from "../chain.ts";
import { everyOneRecorded, startLoad } from "./load.ts";

/** Debian's libfaketime, which stands between a process and its clock; installed where that is allowed. */
function findFakeClock(): string | undefined {
  const places = ["x86_64", "aarch64"].map((cpu) => `/usr/lib/${cpu}-linux-gnu/faketime/libfaketimeMT.so.1`);
  const find = () => places.find((place) => existsSync(place));
  if (!find() && process.getuid?.() === 0 && existsSync("/usr/bin/apt-get")) {
    const environment = { ...process.env, DEBIAN_FRONTEND: "noninteractive" };
    const words = ["install", "-y", "-q", "--no-install-recommends", "faketime"];
    execFileSync("apt-get", words, { stdio: "ignore", env: environment });
  }
  return find();
}

const library = findFakeClock();

test.skipIf(!library)(
  "a system clock that is stepped back and forth loses no acknowledged reading, and the record's cursors go on",
  async () => {
    const folder = mkdtempSync(join(tmpdir(), "millrace-clock-"));
    const clock = join(folder, "clock");
    const step = (offset: string) => writeFileSync(clock, `${offset}\n`);
    step("+0");
    const chain = await startChain({
      environment: {
        LD_PRELOAD: library!,
        FAKETIME_TIMESTAMP_FILE: clock,
        FAKETIME_NO_CACHE: "1",
        // What is stepped is the wall clock: the monotonic one goes on, as it does on a real machine.
        FAKETIME_DONT_FAKE_MONOTONIC: "1",
        DONT_FAKE_MONOTONIC: "1",
      },
    });
    const serverTime = async () => Date.parse((await fetch(`${chain.url}/healthz`)).headers.get("date")!);
    const load = await startLoad(chain.brokerUrl, Date.now() - 4 * 3_600_000);
    for (const [offset, seconds] of [
      ["-30m", -1800],
      ["+2h", 7200],
      ["-1h", -3600],
      ["+0", 0],
    ] as const) {
      step(offset);
      const before = load.acknowledged.length;
      await eventually(`the service's clock at ${offset}`, async () => {
        const ahead = (await serverTime()) - Date.now();
        return Math.abs(ahead - seconds * 1000) < 60_000;
      });
      await eventually(`readings at ${offset}`, () => load.acknowledged.length > before + 150, 30_000);
    }
    await load.stop();
    await everyOneRecorded(chain.url, load.acknowledged);
    const { events } = await chain.get<{ events: { cursor: number }[] }>("/events?limit=1000");
    const cursors = events.map(({ cursor }) => cursor).reverse();
    expect(cursors).toEqual(cursors.map((_, i) => cursors[0] + i));
    expect(await chain.stop()).toBe(0);
    chain.remove();
    rmSync(folder, { recursive: true });
  },
);
