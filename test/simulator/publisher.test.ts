import { decode } from "cbor-x";
import { afterEach, describe, expect, test } from "vitest";
import { analyzerAxis, makePlant, streamIds } from "../../simulator/plant/index.ts";
import {
  type Publisher,
  type PublisherOptions,
  processClock,
  startPublisher,
} from "../../simulator/publisher/index.ts";
import { builtInScenarios, readingAt, type Scenario } from "../../simulator/scenario/index.ts";
import { type Heard, loopbackBroker } from "./support/loopback-broker.ts";
import { until } from "./support/until.ts";

const open: { close(): Promise<void> }[] = [];
const running: Publisher[] = [];
afterEach(async () => {
  for (const publisher of running.splice(0)) await publisher.stop();
  for (const each of open.splice(0)) await each.close();
});

async function opened(port?: number) {
  const made = await loopbackBroker(port);
  open.push(made);
  return made;
}

const plant = makePlant(1);

function publish(url: string, change: Partial<PublisherOptions> = {}): { publisher: Publisher; lines: string[] } {
  const lines: string[] = [];
  const publisher = startPublisher({
    broker: url,
    prefix: "millrace",
    site: "brindle-quay",
    scenario: builtInScenarios.calm,
    plant,
    start: Date.now(),
    speed: 1,
    periodMs: 60,
    inFlight: 20,
    say: (line) => lines.push(line),
    ...change,
  });
  running.push(publisher);
  return { publisher, lines };
}

const read = ({ topic, payload }: Heard) => {
  const stream = topic.split("/")[2] as (typeof streamIds)[number];
  const body = payload[0] === 0x7b ? JSON.parse(payload.toString()) : decode(payload);
  return { stream, json: payload[0] === 0x7b, body, time: new Date(body.time).getTime() };
};

describe("the publisher", () => {
  test("sends every stream at QoS 1 under its topic, one as JSON, two as CBOR, the plant's own values and axis", async () => {
    const { url, readings } = await opened();
    publish(url);
    await until(() => readings().length >= 30, "thirty readings");
    const seen = readings().map(read);
    expect(new Set(readings().map(({ topic }) => topic))).toEqual(
      new Set(streamIds.map((stream) => `millrace/brindle-quay/${stream}/reading`)),
    );
    expect(readings().every(({ qos, retain }) => qos === 1 && !retain)).toBe(true);
    expect(new Set(seen.filter(({ json }) => json).map(({ stream }) => stream))).toEqual(new Set(["bq-410"]));
    for (const { stream, json, body, time } of seen) {
      const made = readingAt(plant, [], stream, body.sequence, { periodMs: 60 })!;
      expect(time).toBe(made.time);
      expect(Float32Array.from(body.values)).toEqual(made.values);
      expect(Array.from(body.values)).toEqual(Array.from(made.values));
      expect(body.values instanceof Float32Array).toBe(!json);
      expect(body.axis).toEqual(analyzerAxis);
      expect(body.context).toEqual(made.context);
    }
  });

  test("never sends from the future, leaves no sequence out, and a restart goes on above where it was", async () => {
    const { url, readings } = await opened();
    const first = publish(url);
    await until(() => readings().length >= 20, "twenty readings");
    await first.publisher.stop();
    const before = readings().length;
    publish(url);
    await until(() => readings().length >= before + 20, "twenty more");
    for (const stream of streamIds) {
      const sequences = readings()
        .map(read)
        .filter((each) => each.stream === stream)
        .map(({ body }) => body.sequence);
      expect(sequences).toEqual([...sequences].sort((a, b) => a - b));
      const own = sequences.slice(0, 6);
      expect(own).toEqual(own.map((_, i) => own[0] + i));
    }
    expect(
      Math.max(
        ...readings()
          .map(read)
          .map(({ time }) => time),
      ),
    ).toBeLessThanOrEqual(Date.now());
  });

  test("tells the process state retained, at the start and when it changes", async () => {
    const { url, heard } = await opened();
    const scenario: Scenario = {
      ...builtInScenarios.calm,
      events: [{ kind: "cleaning", stream: "bq-305", startSeconds: 0.3, durationSeconds: 0.3 }],
    };
    publish(url, { scenario });
    const states = () => heard.filter(({ topic }) => topic.endsWith("/state"));
    await until(() => states().length >= 5, "five states");
    expect(states().every(({ retain, qos }) => retain && qos === 1)).toBe(true);
    const words = states().map(({ topic, payload }) => [topic.split("/")[2], JSON.parse(payload.toString()).state]);
    expect(words.slice(0, 3)).toEqual(streamIds.map((stream) => [stream, "running"]));
    expect(words.slice(3, 5)).toEqual([
      ["bq-305", "cleaning"],
      ["bq-305", "running"],
    ]);
  });

  test("says once when an event begins and once when it ends", async () => {
    const { url } = await opened();
    const scenario: Scenario = {
      ...builtInScenarios.calm,
      repeatMinutes: 1 / 60,
      events: [{ kind: "fouling", stream: "bq-410", startSeconds: 0.1, durationSeconds: 0.4 }],
    };
    const { lines } = publish(url, { scenario });
    const begun = () => lines.filter((line) => line.includes("bq-410 fouling begins: resin grows"));
    await until(() => begun().length === 2, "the second round");
    expect(lines.filter((line) => line.includes("bq-410 fouling ends"))).toHaveLength(1);
  });

  test("sends on after the broker was away: what was made meanwhile comes late, but comes, in order", async () => {
    const first = await loopbackBroker();
    const { lines, publisher } = publish(first.url, { inFlight: 6 });
    await until(() => first.readings().length >= 12, "twelve readings");
    await first.close();
    await until(() => lines.some((line) => line.includes("is not reached")), "the loss to be told");
    const acknowledged = publisher.acknowledged;
    await new Promise((resolve) => setTimeout(resolve, 500));
    const second = await opened(first.port);
    await until(() => publisher.acknowledged > acknowledged + 40, "the stream to go on");
    expect(lines.filter((line) => line.includes("is not reached"))).toHaveLength(1);
    const all = [...first.readings(), ...second.readings()].map(read);
    for (const stream of streamIds) {
      const sequences = all.filter((each) => each.stream === stream).map(({ body }) => body.sequence as number);
      const distinct = [...new Set(sequences)];
      expect(distinct).toEqual([...distinct].sort((a, b) => a - b));
      expect(distinct).toEqual(distinct.map((_, i) => distinct[0]! + i));
    }
  });

  test("has no more under way than it may when the broker is slow to acknowledge", async () => {
    const slow = await opened();
    let waiting = 0;
    let most = 0;
    slow.aedes.authorizePublish = (_client, _packet, done) => {
      waiting++;
      most = Math.max(most, waiting);
      setTimeout(() => {
        waiting--;
        done(null);
      }, 100);
    };
    const { publisher } = publish(slow.url, { inFlight: 4, periodMs: 6 });
    await until(() => publisher.acknowledged >= 24, "24 readings");
    expect(most).toBeLessThanOrEqual(4);
    expect(most).toBeGreaterThan(1);
  });

  test("runs the past faster than the clock and does not overtake it", async () => {
    const { url, readings } = await opened();
    const start = Date.now() - 5000;
    publish(url, { start, speed: 20 });
    await until(() => readings().length >= 300, "300 readings");
    const times = readings()
      .map(read)
      .map(({ time }) => time);
    expect(Math.min(...times)).toBeLessThan(start + 100);
    expect(Math.max(...times)).toBeLessThanOrEqual(Date.now());
  });
});

describe("process time", () => {
  test("runs `speed` times as fast from its start, until it meets the wall clock, and with it from then on", () => {
    let wall = 1_000_000;
    const clock = processClock(() => wall, { start: wall - 90_000, speed: 10 });
    expect(clock.now()).toBe(910_000);
    expect(clock.untilMs(920_000)).toBe(1000);
    wall += 5000;
    expect(clock.now()).toBe(960_000);
    wall += 5000;
    expect(clock.now()).toBe(1_010_000);
    wall += 5000;
    expect(clock.now()).toBe(1_015_000);
    expect(clock.untilMs(1_016_000)).toBe(1000);
  });
});
