import type { Static } from "typebox";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { AlarmsSchema, Judged, ReadingView, Refusals } from "../../core/messages/index.ts";
import { makePlant, type PlantStreamId, spectrumAt, unforeseenBand } from "../../simulator/plant/index.ts";
import { type Chain, eventually, prefix, startChain } from "../chain.ts";

const plant = makePlant(1);
let chain: Chain;
let time = Date.now() - 60_000;
let sequence = 1;

/** The next reading of a stream: `ms` later than the one before, with whatever is put on top of its spectrum. */
function next(stream: PlantStreamId, more: { ms?: number; add?: Float64Array } = {}) {
  time += more.ms ?? 100;
  const values = Array.from(spectrumAt(plant, stream, time), (value, j) => value + (more.add?.[j] ?? 0));
  return { time, sequence: sequence++, values };
}
const latest = async (stream: string) => (await chain.get<ReadingView>(`/streams/${stream}/reading`)).judged;
const refusals = (stream?: string) => chain.get<Refusals>(`/refusals${stream ? `?stream=${stream}` : ""}`);
async function refusedLast(): Promise<string> {
  const [last] = (await refusals()).latest;
  return last ? `${last.stream} · ${last.reason} · ${last.says}` : "none";
}
const isRecorded = (stream: string, at: number) =>
  eventually(`a reading of ${stream} at ${at}`, async () => {
    const judged = await latest(stream).catch(() => undefined);
    return judged?.time === at ? judged : undefined;
  });

beforeAll(async () => {
  chain = await startChain();
});
afterAll(async () => {
  await chain.stop();
  chain.remove();
});

describe("a reading goes in over MQTT and comes out judged", () => {
  test("it is scored for all properties of its stream, with uncertainty, statistics and verdict", async () => {
    const reading = next("bq-305");
    await chain.publish("bq-305", reading);
    const judged = await isRecorded("bq-305", reading.time);
    expect(judged.verdict).toEqual(["inside"]);
    expect(Object.keys(judged.properties)).toEqual(["ethyl acetate", "ethanol", "water"]);
    const sum = Object.values(judged.properties).reduce((total, { value }) => total + value!, 0);
    expect(sum).toBeGreaterThan(99); // the three make up the blend: 100 wt%
    expect(sum).toBeLessThan(101);
    for (const { uncertainty } of Object.values(judged.properties)) expect(uncertainty).toBeGreaterThan(0);
    expect(judged.ratios.t2! > 0 && judged.ratios.t2! < 1 && judged.ratios.q! > 0 && judged.ratios.q! < 1).toBe(true);
    expect(judged.limitSet).toBe(1);
    expect(judged.model).toMatch(/^[0-9a-f]{64}$/);
  });

  test("an unforeseen band makes it unfamiliar, without uncertainty, and the alarm waits for three in a row", async () => {
    const band = unforeseenBand();
    const alarms = async () => (await chain.get<Static<typeof AlarmsSchema>>("/alarms")).alarms;
    let judged: Judged | undefined;
    for (let i = 0; i < 2; i++) {
      const reading = next("bq-305", { add: band });
      await chain.publish("bq-305", reading);
      judged = await isRecorded("bq-305", reading.time);
    }
    expect(judged!.verdict[0]).toBe("unfamiliar");
    expect(Object.values(judged!.properties).every(({ uncertainty }) => uncertainty === null)).toBe(true);
    expect(await alarms()).toEqual([]);
    const third = next("bq-305", { add: band });
    await chain.publish("bq-305", third);
    const [alarm] = await eventually("the alarm", async () => {
      const open = await alarms();
      return open.length > 0 ? open : undefined;
    });
    expect(alarm).toMatchObject({ stream: "bq-305", key: "unfamiliar", state: "unacknowledged", priority: "high" });
    // The band lies at 1 880 nm: the words name the region and what it means.
    expect(alarm.says).toMatch(
      /^Q \d.* × limit\. 1\u202f8\d\d–1\u202f[89]\d\d nm gives \d+ % of Q: a shape that the calibration never saw/,
    );

    const view = await chain.get<ReadingView>(`/streams/bq-305/reading?at=${third.time}`);
    expect(view.spectrum).toHaveLength(301);
    const { explanation } = view;
    const sum = (values: number[], of = (value: number) => value) =>
      values.reduce((total, value) => total + of(value), 0);
    expect(sum(explanation!.q, Math.abs) / view.judged.q!).toBeCloseTo(1, 9);
    expect(sum(explanation!.t2) / view.judged.t2!).toBeCloseTo(1, 9);
    expect(explanation!.says).toContain("of Q");
  });

  test("acknowledging names the person; once is enough, and the alarm is gone when the band is", async () => {
    const acknowledge = () =>
      fetch(`${chain.url}/api/v1/streams/bq-305/alarms/unfamiliar/acknowledge`, {
        method: "POST",
        headers: { "content-type": "application/json" },
        body: JSON.stringify({ note: "sample taken" }),
      });
    expect((await acknowledge()).status).toBe(200);
    const again = await acknowledge();
    expect(again.status).toBe(409);
    expect(((await again.json()) as { says: string }).says).toBe(
      "Unfamiliar spectrum: already acknowledged by R. Quill.",
    );
    for (let i = 0; i < 3; i++) await chain.publish("bq-305", next("bq-305"));
    await eventually("no open alarm", async () => {
      const { alarms } = await chain.get<Static<typeof AlarmsSchema>>("/alarms");
      return alarms.length === 0 ? "none" : undefined;
    });
    const { events } = await chain.get<{ events: { kind: string; says: string }[] }>("/events?stream=bq-305");
    const kinds = events.map(({ kind }) => kind).reverse();
    expect(kinds.filter((kind) => kind.startsWith("alarm"))).toEqual([
      "alarm raised",
      "alarm acknowledged",
      "alarm cleared",
    ]);
    expect(kinds.filter((kind) => kind.startsWith("excursion"))).toEqual(["excursion began", "excursion ended"]);
    expect(events.find(({ kind }) => kind === "alarm acknowledged")!.says).toContain("sample taken");
  });
});

describe("bad input costs nothing else", () => {
  const bad: [string, () => [topic: string, payload: string | Buffer], RegExp][] = [
    ["a malformed payload", () => [`${prefix}/bq-201/reading`, '{"time":'], /^bq-201 · malformed · no JSON/],
    ["nothing at all", () => [`${prefix}/bq-201/reading`, ""], /^bq-201 · malformed · the payload is empty/],
    [
      "an axis that does not cover the model's",
      () => [
        `${prefix}/bq-201/reading`,
        JSON.stringify({ ...next("bq-201"), axis: { unit: "nm", start: 1400, step: 2, count: 301 } }),
      ],
      /^bq-201 · wrong axis · .*1400/,
    ],
    [
      "too few values",
      () => [`${prefix}/bq-201/reading`, JSON.stringify({ ...next("bq-201"), values: [1, 2, 3] })],
      /^bq-201 · wrong length · 3 values, expected 301/,
    ],
    [
      "NaN",
      () => {
        const reading = next("bq-201");
        return [
          `${prefix}/bq-201/reading`,
          JSON.stringify({ ...reading, values: reading.values.with(17, Number.NaN) }),
        ];
      },
      /^bq-201 · not finite · value 17 is NaN/,
    ],
    [
      "a saturated spectrum",
      () => {
        const reading = next("bq-201");
        return [
          `${prefix}/bq-201/reading`,
          JSON.stringify({ ...reading, values: reading.values.map((v) => Math.min(v, 0.3)) }),
        ];
      },
      /^bq-201 · saturated · \d+ of 301 channels/,
    ],
    [
      "a flat spectrum",
      () => [`${prefix}/bq-201/reading`, JSON.stringify({ ...next("bq-201"), values: Array(301).fill(0.5) })],
      /^bq-201 · flat · all 301 values are 0\.5/,
    ],
    [
      "a reading from the future",
      () => [`${prefix}/bq-201/reading`, JSON.stringify({ ...next("bq-201"), time: Date.now() + 3_600_000 })],
      /^bq-201 · future · its time is 3600 s ahead/,
    ],
    [
      "a late reading",
      () => [`${prefix}/bq-305/reading`, JSON.stringify({ ...next("bq-305", { ms: 0 }), time: time - 600_000 })],
      /^bq-305 · late · it is (599|60\d) s older/,
    ],
    [
      "an unknown stream",
      () => [`${prefix}/bq-999/reading`, JSON.stringify(next("bq-201"))],
      /^null · unknown stream · topic .*bq-999.* bq-201, bq-305, bq-410/,
    ],
  ];

  test.each(bad)("%s is refused with its reason", async (_, make, expected) => {
    const [topic, payload] = make();
    await chain.publishRaw(topic, payload);
    await eventually(String(expected), async () => expected.test(await refusedLast()));
    const good = next("bq-201");
    await chain.publish("bq-201", good);
    expect((await isRecorded("bq-201", good.time)).verdict).toEqual(["inside"]);
  });

  test("an unusable reading is on record as such, so that the trend shows it", async () => {
    const flat = { ...next("bq-201"), values: Array(301).fill(0.25) };
    await chain.publish("bq-201", flat);
    const judged = await isRecorded("bq-201", flat.time);
    expect(judged.verdict).toEqual(["unusable"]);
    expect(judged.unusable).toContain("all 301 values are 0.25");
    expect(judged.properties.ethanol).toEqual({ value: null, uncertainty: null });
  });

  test("a reading that comes twice is recorded once", async () => {
    const reading = next("bq-410");
    for (let i = 0; i < 3; i++) await chain.publish("bq-410", reading);
    const after = next("bq-410");
    await chain.publish("bq-410", after);
    await isRecorded("bq-410", after.time);
    const trend = await chain.get<{ time: number[] }>(
      `/streams/bq-410/trend?from=${reading.time}&to=${after.time + 1}`,
    );
    expect(trend.time).toEqual([reading.time, after.time]);
    expect((await refusals("bq-410")).totals).toEqual([]);
  });

  test("the same spectrum again and again is frozen", async () => {
    const { values } = next("bq-410");
    for (let i = 0; i < 4; i++) {
      const { time: at, sequence: number } = next("bq-410");
      await chain.publish("bq-410", { time: at, sequence: number, values });
    }
    const judged = await isRecorded("bq-410", time);
    expect(judged.verdict).toEqual(["unusable"]);
    expect(judged.unusable).toBe("exactly the same spectrum 4 times in a row");
  });

  test("a spectrum on another axis that covers the model's is brought there", async () => {
    const reading = next("bq-410");
    // 2 nm spacing by straight lines between the 4 nm points, from high to low: the same spectrum for a linear resampling.
    const fine = Array.from({ length: 601 }, (_, i) => {
      const j = 600 - i;
      const low = reading.values[Math.floor(j / 2)];
      return j % 2 === 0 ? low : (low + reading.values[Math.floor(j / 2) + 1]) / 2;
    });
    await chain.publish("bq-410", {
      ...reading,
      values: fine,
      axis: { unit: "nm", start: 2200, step: -2, count: 601 },
    });
    const judged = await isRecorded("bq-410", reading.time);
    expect(judged.verdict).toEqual(["inside"]);
    expect(judged.properties.water.value).toBeGreaterThan(0);
  });

  test("a request for what is not there says what is", async () => {
    const answer = await fetch(`${chain.url}/api/v1/streams/bq-1/trend?from=1&to=2`);
    expect(answer.status).toBe(404);
    expect(await answer.json()).toEqual({
      code: "unknown-stream",
      says: "bq-1 is no stream of this plant; it has bq-201, bq-305, bq-410.",
    });
    const backwards = await fetch(`${chain.url}/api/v1/streams/bq-201/trend?from=2&to=1`);
    expect(backwards.status).toBe(400);
  });

  test("a page from elsewhere is not answered", async () => {
    const answer = await fetch(`${chain.url}/api/v1/plant`, { headers: { origin: "http://elsewhere.example" } });
    expect(answer.status).toBe(403);
  });
});
