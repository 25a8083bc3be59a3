import { describe, expect, test } from "vitest";
import { chatteringOf, fleetingOf, floodsIn, mostWithin, performanceOf } from "../../../../core/alarms/index.ts";
import { checker, type Performance, PerformanceSchema, type RecordedEvent } from "../../../../core/messages/index.ts";

const second = 1000;
const minute = 60 * second;
const hour = 60 * minute;
const day = 24 * hour;
const start = Date.UTC(2026, 5, 1);

interface Told {
  at: number;
  kind?: string;
  key?: string;
  priority?: "high" | "medium" | "low" | "record only";
}

/** Alarm events as the record holds them, in this order. */
function events(...told: Told[]): RecordedEvent[] {
  return told.map(({ at, kind = "raised", key = "water-high", priority = "low" }, i) => {
    const purpose = { cause: "", consequence: "", response: "", timeToRespondMinutes: 1 };
    const named = { stream: "bq-1", key, title: key, priority, ...purpose };
    const unannounced = kind.includes("unannounced");
    return {
      cursor: i + 1,
      at,
      stream: "bq-1",
      kind: `alarm ${kind}`,
      says: "",
      ...(unannounced
        ? { setAside: { ...named, state: "shelved" as const, active: true } }
        : { alarm: { ...named, state: "unacknowledged" as const, since: at, raisedAt: at, says: "", limitSet: 1 } }),
    };
  });
}
const raisedAt = (times: number[], more: Partial<Told> = {}) => events(...times.map((at) => ({ at, ...more })));
const figure = (performance: Performance, key: string) => performance.figures.find((each) => each.key === key)!;
const every = (n: number, ms: number, from = start) => Array.from({ length: n }, (_, i) => from + i * ms);

describe("floods", () => {
  test("eleven alarms in ten minutes begin one, ten do not", () => {
    expect(floodsIn(every(10, 30 * second), start + day)).toEqual([]);
    const [flood] = floodsIn(every(11, 30 * second), start + day);
    expect(flood).toMatchObject({ start: start + 5 * minute, annunciations: 11, peak: 11 });
  });

  test("it ends when fewer than five are left in ten minutes: the seventh of eleven has gone out of the window", () => {
    const [flood] = floodsIn(every(11, 30 * second), start + day);
    expect(flood.end).toBe(start + 6 * 30 * second + 10 * minute);
  });

  test("alarms that keep five in the window keep it going, slower ones do not", () => {
    const rush = every(11, 10 * second);
    const slow = (gap: number) => every(10, gap, rush[10] + gap);
    expect(floodsIn([...rush, ...slow(2 * minute)], start + day)).toMatchObject([{ annunciations: 21 }]);
    expect(floodsIn([...rush, ...slow(3 * minute)], start + day)[0].annunciations).toBeLessThan(21);
  });

  test("two rushes an hour apart are two", () => {
    const times = [...every(12, second), ...every(12, second, start + hour)];
    expect(floodsIn(times, start + day).map(({ annunciations }) => annunciations)).toEqual([12, 12]);
  });

  test("one that is not over at the end has no end", () => {
    expect(floodsIn(every(11, second), start + 5 * minute)).toMatchObject([{ end: null }]);
  });

  test("agree with counting the window anew every second", () => {
    const times = every(400, 41 * second)
      .map((at, i) => at + ((i * 7919) % 300) * second)
      .sort((a, b) => a - b);
    const end = times.at(-1)! + hour;
    let inFlood = false;
    const moments: number[] = [];
    for (let t = start; t < end; t += second) {
      const count = times.filter((at) => at > t - 10 * minute && at <= t).length;
      const before: boolean = inFlood;
      inFlood = before ? count >= 5 : count > 10;
      if (inFlood !== before) moments.push(t);
    }
    expect(moments.length).toBeGreaterThan(0);
    expect(floodsIn(times, end).flatMap((flood) => [flood.start, flood.end])).toEqual(moments);
  });
});

describe("nuisance", () => {
  const told = (times: number[], clearedAfter?: number, acknowledgedAfter?: number) =>
    times.map((at) => ({
      ...{ stream: "bq-1", key: "k", title: "K", priority: "low" as const, at },
      ...(clearedAfter === undefined ? {} : { clearedAt: at + clearedAfter }),
      ...(acknowledgedAfter === undefined ? {} : { acknowledgedAt: at + acknowledgedAfter }),
    }));

  test("three times within a minute is chattering, within a minute and a second it is not", () => {
    expect(chatteringOf(told([start, start + 30 * second, start + 59 * second]))).toMatchObject([
      { annunciations: 3, worst: 3 },
    ]);
    expect(chatteringOf(told([start, start + 30 * second, start + 60 * second]))).toEqual([]);
  });

  test("gone within a minute before anybody answered is fleeting; answered, long or chattering is not", () => {
    expect(fleetingOf(told([start, start + hour], 20 * second))).toMatchObject([{ annunciations: 2 }]);
    expect(fleetingOf(told([start], 20 * second, 10 * second))).toEqual([]);
    expect(fleetingOf(told([start], 60 * second))).toEqual([]);
    expect(fleetingOf(told(every(5, 10 * second), 5 * second))).toEqual([]);
  });

  test("the most in any ten minutes slides: it may lie across two periods of the clock", () => {
    expect(mostWithin([start + 9 * minute, start + 11 * minute, start + 30 * minute], 10 * minute)).toBe(2);
  });
});

describe("the figures", () => {
  const range = { from: start, to: start + 30 * day };

  test("144 alarms a day, evenly: as recommended in IEC 62682", () => {
    const performance = performanceOf(raisedAt(every(144 * 30, 10 * minute)), range);
    expect(figure(performance, "per-day")).toMatchObject({ value: 144, rating: "acceptable" });
    expect(figure(performance, "per-hour")).toMatchObject({ value: 6, rating: "acceptable" });
    expect(figure(performance, "per-10-min")).toMatchObject({ value: 1, rating: "acceptable" });
    expect(figure(performance, "most-10-min")).toMatchObject({ value: 1, rating: "acceptable" });
    expect(performance.floods).toEqual([]);
    expect(performance.enough).toBe(true);
    expect(checker(PerformanceSchema).mismatch(performance)).toBeUndefined();
  });

  test("the same number in a rush each day has the same mean, and shows as what it is", () => {
    const rushes = Array.from({ length: 30 }, (_, i) => every(144, 2 * second, start + i * day)).flat();
    const performance = performanceOf(raisedAt(rushes), range);
    expect(figure(performance, "per-10-min")).toMatchObject({ value: 1, rating: "acceptable" });
    expect(figure(performance, "most-10-min")).toMatchObject({ value: 144, rating: "beyond" });
    // 144 come within 288 s: one of the day's 144 periods has more than ten, one of its 24 hours more than thirty.
    expect(figure(performance, "bad-10-min").value).toBeCloseTo(100 / 144, 10);
    expect(figure(performance, "bad-hours").value).toBeCloseTo(100 / 24, 10);
    expect(performance.floods).toHaveLength(30);
    // From the eleventh (20 s) until four are left: the 140th has gone out of the window (278 s + 600 s).
    expect(figure(performance, "in-flood").value).toBeCloseTo((100 * (278 + 600 - 20)) / 86_400, 10);
  });

  test("what is between acceptable and too much is manageable", () => {
    const performance = performanceOf(raisedAt(every(200 * 30, day / 200)), range);
    expect(figure(performance, "per-day")).toMatchObject({ value: 200, rating: "manageable" });
    expect(figure(performanceOf(raisedAt(every(400 * 30, day / 400)), range), "per-day").rating).toBe("beyond");
  });

  test("each names where its recommendation is published", () => {
    for (const { source, recommended } of performanceOf([], range).figures) {
      expect(source).toMatch(/ISA-18\.2-2009|IEC 62682/);
      expect(recommended).not.toBe("");
    }
  });

  test("nothing happened: no share is made of nothing", () => {
    const performance = performanceOf([], range);
    expect(figure(performance, "top-ten")).toMatchObject({ value: null, rating: null });
    expect(performance.byPriority.map(({ percent }) => percent)).toEqual([null, null, null]);
    expect(performance.acknowledging).toEqual({ acknowledged: 0, never: 0, medianMs: null, ninthDecileMs: null });
  });

  test("the load by alarm and by priority", () => {
    const told = [
      ...every(8, hour).map((at): Told => ({ at, key: "a", priority: "low" })),
      ...every(2, hour).map((at): Told => ({ at, key: "b", priority: "high" })),
    ];
    const performance = performanceOf(events(...told), range);
    expect(performance.mostFrequent).toMatchObject([
      { key: "a", count: 8, percent: 80 },
      { key: "b", count: 2, percent: 20 },
    ]);
    expect(performance.byPriority).toMatchObject([
      { priority: "high", count: 2, percent: 20, recommended: 5 },
      { priority: "medium", count: 0, percent: 0, recommended: 15 },
      { priority: "low", count: 8, percent: 80, recommended: 80 },
    ]);
  });

  test("the ten most frequent of more than ten carry a share of the load; of ten or fewer it would say nothing", () => {
    const load = (alarms: number) =>
      performanceOf(events(...every(4 * alarms, hour).map((at, i): Told => ({ at, key: `k${i % alarms}` }))), range);
    expect(figure(load(40), "top-ten")).toMatchObject({ value: 25, rating: "beyond" });
    expect(figure(load(10), "top-ten")).toMatchObject({ value: null, rating: null });
  });

  test("only what called somebody counts: not what is for the record only, nor what came while set aside", () => {
    const performance = performanceOf(
      events(
        { at: start, priority: "record only" },
        { at: start + minute, kind: "raised unannounced" },
        { at: start + 2 * minute, kind: "annunciated anew" },
        { at: start + 3 * minute, kind: "raised again", key: "b" },
      ),
      range,
    );
    expect(performance).toMatchObject({ annunciations: 2, withheld: 1 });
  });

  test("time to acknowledge: median and ninth decile of those that were", () => {
    const waits = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10].map((n) => n * minute);
    const told = waits.flatMap((wait, i): Told[] => [
      { at: start + i * hour },
      { at: start + i * hour + wait, kind: "acknowledged" },
      { at: start + i * hour + wait + second, kind: "cleared" },
    ]);
    const performance = performanceOf(events(...told, { at: start + day }), range);
    expect(performance.acknowledging).toEqual({
      acknowledged: 10,
      never: 1,
      medianMs: 5 * minute,
      ninthDecileMs: 9 * minute,
    });
  });

  test("stale is longer than a day in alarm; standing is what holds at the end, also when it came before the beginning", () => {
    const told = events(
      { at: start - 3 * day, key: "old" },
      { at: start + day, key: "long" },
      { at: start + 2 * day + hour, key: "long", kind: "cleared" },
      { at: start + day, key: "short" },
      { at: start + 2 * day - hour, key: "short", kind: "cleared" },
    );
    const performance = performanceOf(told, range);
    expect(performance.annunciations).toBe(2);
    expect(performance.stale.map(({ key }) => key)).toEqual(["old", "long"]);
    expect(performance.standing).toMatchObject([{ key: "old", since: start - 3 * day }]);
    expect(figure(performance, "stale")).toMatchObject({ value: 2, rating: "acceptable" });
  });

  test("an alarm that a limit set took away stands no more", () => {
    const removed: RecordedEvent = {
      cursor: 9,
      at: start + hour,
      stream: "bq-1",
      kind: "alarm removed",
      key: "a",
      says: "",
    };
    const performance = performanceOf([...events({ at: start, key: "a" }), removed], range);
    expect(performance.standing).toEqual([]);
  });
});
