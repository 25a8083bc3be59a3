import { spawn } from "node:child_process";
import { fileURLToPath } from "node:url";
import { expect, test } from "vitest";
import { WebSocket } from "ws";
import type { FromServer } from "../../core/messages/index.ts";
import { startChain } from "../chain.ts";
import { figure, residentMegabytes } from "./load.ts";

const simulator = fileURLToPath(new URL("../../dist/simulator/main.js", import.meta.url));
const full = process.env.MILLRACE_FULL === "1";
const seconds = full ? 600 : 20;
/** A day of the plant in the full run; the short one goes as fast, for less. */
const speed = 144;
const periodMs = 5000;
const sampleMs = full ? 5000 : 1000;

const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;

test(
  `${((seconds * speed) / 3600).toFixed(1)} hours of the plant in ${seconds} s, with all that happens there: every reading on record, memory flat`,
  async () => {
    const chain = await startChain();
    const screen = new WebSocket(`${chain.url.replace("http", "ws")}/live`);
    let pushed = 0;
    screen.on("message", (data) => {
      const message = JSON.parse(String(data)) as FromServer;
      const streams = ["bq-201", "bq-305", "bq-410"];
      if (message.type === "hello") screen.send(JSON.stringify({ type: "subscribe", streams }));
      if (message.type === "batch") pushed += message.readings.length + message.skipped;
    });
    const start = new Date(Date.now() - seconds * (speed - 1) * 1000).toISOString();
    const words = [
      "run",
      "--broker",
      chain.brokerUrl,
      "--prefix",
      "millrace",
      "--site",
      "brindle-quay",
      "--scenario",
      "demo",
    ];
    const pace = ["--start", start, "--speed", String(speed), "--period-ms", String(periodMs)];
    const child = spawn(process.execPath, [simulator, ...words, ...pace], { stdio: "ignore" });
    const memory: number[] = [];
    const behind: number[] = [];
    for (const began = Date.now(); Date.now() - began < seconds * 1000; ) {
      await new Promise((resolve) => setTimeout(resolve, sampleMs));
      memory.push(await residentMegabytes(chain.url));
      behind.push(await figure(chain.url, "millrace_behind_seconds"));
    }
    const ended = new Promise((resolve) => child.once("exit", resolve));
    child.kill("SIGTERM");
    await ended;
    await new Promise((resolve) => setTimeout(resolve, 2000));

    const text = await (await fetch(`${chain.url}/metrics`)).text();
    const total = (name: string) =>
      text
        .split("\n")
        .filter((line) => line.startsWith(`${name}{`))
        .reduce((sum, line) => sum + Number(line.slice(line.lastIndexOf(" "))), 0);
    const recorded = total("millrace_readings_total");
    const third = Math.floor(memory.length / 3);
    const [middle, last] = [mean(memory.slice(third, 2 * third)), mean(memory.slice(2 * third))];
    console.log(
      `soak: ${recorded} readings, ${total("millrace_events_total")} events, ${total("millrace_refusals_total")} refused; ` +
        `memory ${memory[0].toFixed(0)} MB at first, ${middle.toFixed(0)} in the middle third, ${last.toFixed(0)} in the last; ` +
        `behind by at most ${Math.max(...behind).toFixed(1)} s`,
    );
    // Three streams; the scenario silences and spoils some of it.
    const sent = (3 * seconds * speed * 1000) / periodMs;
    expect(recorded).toBeGreaterThan(0.85 * sent);
    expect(pushed).toBe(recorded);
    // A service that is young still fills its caches: flat is asked of the long run.
    expect(last / middle).toBeLessThan(full ? 1.1 : 1.5);
    expect(await figure(chain.url, "millrace_waiting_readings")).toBe(0);
    screen.close();
    expect(await chain.stop()).toBe(0);
    chain.remove();
  },
  (seconds + 120) * 1000,
);
