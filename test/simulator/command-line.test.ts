import { mkdtemp, readdir, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { decodeMultiple } from "cbor-x";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { LabMessage } from "../../core/messages/index.ts";
import { makePlant, spectrumAt, streamIds, streamPlans } from "../../simulator/plant/index.ts";
import type { SimulatedReading, Truth } from "../../simulator/scenario/index.ts";
import { loopbackBroker } from "./support/loopback-broker.ts";
import { simulator, startSimulator } from "./support/simulator-process.ts";
import { until } from "./support/until.ts";

let folder: string;
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "millrace-simulator-"));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

/** The two kinds of item that a history has. */
function parted(out: Buffer) {
  const items = decodeMultiple(out) as (SimulatedReading | { stream: string; received: number; lab: LabMessage })[];
  return {
    readings: items.filter((item): item is SimulatedReading => "values" in item),
    results: items.filter((item) => "lab" in item),
  };
}

describe("history", () => {
  const from = Date.UTC(2026, 10, 27);
  const to = from + 2 * 86_400_000;
  const periodMs = 60_000;
  let readings: SimulatedReading[];
  let results: { stream: string; received: number; lab: LabMessage }[];
  let truth: Truth;

  beforeAll(async () => {
    const file = join(folder, "truth.json");
    const stretch = ["--from", new Date(from).toISOString(), "--to", String(to), "--period-ms", String(periodMs)];
    const { code, out, err } = await simulator("history", ...stretch, "--truth", file);
    expect(err).toBe("");
    expect(code).toBe(0);
    ({ readings, results } = parted(out));
    truth = JSON.parse(await readFile(file, "utf8"));
  });

  test("is a CBOR sequence of readings in order of time, sequences without a gap but where the truth says silent", () => {
    for (let i = 1; i < readings.length; i++) expect(readings[i]!.time > readings[i - 1]!.time).toBe(true);
    for (const stream of streamIds) {
      const ours = readings.filter((reading) => reading.stream === stream);
      const silent = truth.events.filter((event) => event.stream === stream && event.kind === "silent");
      const missing = silent.reduce((sum, { start, end }) => sum + (end - start) / periodMs, 0);
      expect(ours.length).toBe(2 * 1440 - missing);
      expect(ours[0]!.time).toBeGreaterThanOrEqual(from);
      expect(ours.at(-1)!.time).toBeLessThan(to);
    }
    expect(truth.events.some(({ kind }) => kind === "silent")).toBe(true);
  });

  test("carries spectra as float32 typed arrays, bit for bit those of the plant where nothing happens", () => {
    const plant = makePlant(1);
    const healthy = readings.filter(
      ({ stream, time }) =>
        !truth.events.some((event) => event.stream === stream && event.start <= time && time <= event.settled),
    );
    expect(healthy.length).toBeGreaterThan(1000);
    for (const { stream, time, values, context } of healthy.filter((_, i) => i % 50 === 0)) {
      expect(values).toBeInstanceOf(Float32Array);
      expect(values).toEqual(spectrumAt(plant, stream, time));
      expect(context.temperature).toBeCloseTo(streamPlans[stream].temperature.middleC, -1);
    }
  });

  test("is the same again, and a later start continues it without a difference", async () => {
    const middle = from + 86_400_000;
    const { out } = await simulator(
      "history",
      "--from",
      String(middle),
      "--to",
      String(to),
      "--period-ms",
      String(periodMs),
    );
    const later = parted(out);
    expect(later.readings).toEqual(readings.filter(({ time }) => time >= middle));
    expect(later.results).toEqual(results.filter(({ lab }) => Date.parse(String(lab.time)) >= middle));
  });

  test("has the laboratory's results between its readings, where they were there, hours after their samples", () => {
    expect(results.length).toBeGreaterThan(60); // 6 samples a day of three lines, with six properties together
    for (const { stream, received, lab } of results) {
      const drawn = Date.parse(String(lab.time));
      expect(drawn).toBeGreaterThanOrEqual(from);
      expect((received - drawn) / 3_600_000).toBeGreaterThan(1.9);
      expect((received - drawn) / 3_600_000).toBeLessThan(3.1);
      expect(streamPlans[stream as keyof typeof streamPlans].properties.map(({ name }) => name)).toContain(
        lab.property,
      );
    }
    expect(results.map(({ received }) => received)).toEqual(
      results.map(({ received }) => received).sort((a, b) => a - b),
    );
  });

  test("gives only the streams that were asked for", async () => {
    const { out } = await simulator(
      ...["history", "--from", String(from), "--to", String(from + 600_000), "--period-ms", "60000"],
      ...["--streams", "bq-410", "bq-201"],
    );
    const seen = decodeMultiple(out) as SimulatedReading[];
    expect(seen.map(({ stream }) => stream).sort()).toEqual([...Array(10).fill("bq-201"), ...Array(10).fill("bq-410")]);
  });

  test("ends quietly when its reader has had enough", async () => {
    const { child, ended } = startSimulator(
      ...["history", "--from", String(from), "--to", String(to), "--period-ms", "1000"],
    );
    child.stdout.once("data", () => child.stdout.destroy());
    const { code, err } = await ended;
    expect(err).toBe("");
    expect(code).toBe(0);
  });
});

describe("calibration", () => {
  test("writes the table and the held-out samples of every stream", async () => {
    const out = join(folder, "made", "here");
    const { code } = await simulator("calibration", "--out", out, "--seed", "4");
    expect(code).toBe(0);
    expect((await readdir(out)).sort()).toEqual(
      streamIds.flatMap((stream) => [`${stream}.calibration.csv`, `${stream}.validation.csv`]).sort(),
    );
  });

  test("says what to do when it can't write, and ends with 1", async () => {
    const { code, err } = await simulator("calibration", "--out", "/dev/null/x");
    expect(code).toBe(1);
    expect(err).toMatch(/--out \/dev\/null\/x can't be written: .*Name a folder that can\./);
  });
});

describe("bad usage ends with 2 and says what is wrong", () => {
  test.each([
    [["history", "--from", "yesterday", "--to", "2", "--period-ms", "1000"], /"yesterday" is no moment: give RFC 3339/],
    [
      ["history", "--from", "1764547200000", "--to", "1764547100000", "--period-ms", "1000"],
      /--to is not after --from/,
    ],
    [["history", "--from", "1764547200000", "--to", "1764547300000", "--period-ms", "0"], /not a whole number from 3/],
    [
      ["history", "--from", "1764547200000", "--to", "1764547300000", "--period-ms", "9", "--streams", "x"],
      /no stream of the plant: bq-201/,
    ],
    [["calibration"], /--out/],
    [["run", "--broker", "nowhere"], /--broker is "nowhere", expected an address/],
    [["run", "--broker", "mqtt://127.0.0.1:1", "--speed", "5"], /would make readings from the future.*Add a --start/],
    [["run", "--broker", "mqtt://127.0.0.1:1", "--speed", "-1"], /not a number above 0/],
    [["walk"], /unknown command/],
  ])("%j", async (args, says) => {
    const { code, err } = await simulator(...args);
    expect(err).toMatch(says);
    expect(code).toBe(2);
  });

  test("a scenario that is none ends with 1", async () => {
    const { code, err } = await simulator("run", "--broker", "mqtt://127.0.0.1:1", "--scenario", "storm");
    expect(err).toMatch(/storm: .*expected one of calm, demo, faults, or a file/);
    expect(code).toBe(1);
  });
});

describe("run", () => {
  test.each(["SIGTERM", "SIGINT"] as const)(
    "publishes a scenario file's events, and on %s stops cleanly with 0",
    async (signal) => {
      const broker = await loopbackBroker();
      const file = join(folder, `${signal}.json`);
      const event = { kind: "silent", stream: "bq-201", startSeconds: 0, durationSeconds: 3600 };
      await writeFile(
        file,
        JSON.stringify({ format: "millrace-scenario", formatVersion: 1, name: "test", events: [event] }),
      );
      const { child, ended } = startSimulator(
        ...["run", "--broker", broker.url, "--scenario", file, "--period-ms", "60"],
        ...["--site", "elsewhere", "--prefix", "mill"],
      );
      try {
        await until(() => broker.readings().length >= 20, "twenty readings");
        child.kill(signal);
        const { code, out, err } = await ended;
        expect(err).toBe("");
        expect(code).toBe(0);
        expect(out.toString()).toMatch(/bq-201 silent begins: the analyzer sends nothing/);
        expect(out.toString()).toMatch(new RegExp(`${signal}: stopped; \\d+ readings were acknowledged\n$`));
        const topics = new Set(broker.readings().map(({ topic }) => topic));
        expect(topics).toEqual(new Set(["mill/elsewhere/bq-305/reading", "mill/elsewhere/bq-410/reading"]));
      } finally {
        child.kill("SIGKILL");
        await broker.close();
      }
    },
  );
});
