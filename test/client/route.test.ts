import { describe, expect, test } from "vitest";
import { defaultWindow, href, parseRoute, type Route } from "../../client/app/route.ts";
import { byUrgency, countOf } from "../../client/data/alarm-order.ts";
import { nearestSamples } from "../../client/data/nearest-samples.ts";
import type { OpenAlarm } from "../../core/messages/index.ts";

const parse = (url: string) => {
  const { pathname, search } = new URL(url, "http://plant.example");
  return parseRoute(pathname, search);
};

describe("the URL", () => {
  const at = Date.UTC(2026, 11, 1, 14, 5, 12, 250);
  const routes: Route[] = [
    { view: "watch", window: { kind: "live", spanMs: 28_800_000 }, stream: undefined },
    { view: "watch", window: { kind: "stopped", from: at, to: at + 3_600_000 }, stream: "bq-305" },
    { view: "watch", window: { kind: "since", from: at }, stream: undefined },
    { view: "reading", stream: "bq-305", at },
    { view: "reading", stream: undefined, at: undefined },
    { view: "excursions", stream: "bq-410" },
    { view: "handover", at, words: "drum 4" },
    { view: "handover", at: undefined, words: undefined },
    { view: "alarms" },
    { view: "plant" },
  ];
  test.each(routes)("holds all of %j", (route) => {
    expect(parse(href(route))).toEqual(route);
  });

  test.each([
    ["/", "watch"],
    ["/no-such-view", "watch"],
    ["/watch?last=nonsense", "watch"],
    ["/watch?from=2026-12-01T10:00:00Z&to=2026-12-01T09:00:00Z", "watch"],
  ])("%s, which makes no sense, is Watch, live", (url, view) => {
    expect(parse(url)).toMatchObject({ view, window: defaultWindow });
  });
});

describe("alarms", () => {
  const alarm = (key: string, priority: OpenAlarm["priority"], state: OpenAlarm["state"], raisedAt: number) =>
    ({ key, priority, state, raisedAt }) as OpenAlarm;
  const open = [
    alarm("a", "low", "unacknowledged", 9),
    alarm("b", "high", "acknowledged", 8),
    alarm("c", "high", "unacknowledged", 1),
    alarm("d", "high", "returned unacknowledged", 5),
    alarm("e", "medium", "acknowledged", 7),
    alarm("f", "medium", "latched unacknowledged", 2),
    alarm("g", "medium", "latched acknowledged", 3),
  ];

  test("stand by priority, then those that wait for a person, then the newest; the list itself is not changed", () => {
    const frozen = Object.freeze([...open]);
    expect(byUrgency(frozen).map(({ key }) => key)).toEqual(["d", "c", "b", "f", "e", "g", "a"]);
  });

  test("are counted by priority, and how many wait", () => {
    expect(countOf(open, "high")).toEqual({ open: 3, waiting: 2 });
    expect(countOf(open, "medium")).toEqual({ open: 3, waiting: 1 });
  });
});

test("the nearest calibration samples are measured in standard deviations of each score", () => {
  // First score: mean 0, standard deviation 10; second: mean 0, standard deviation 1.
  const samples = {
    names: ["left", "right", "up", "down", "middle"],
    scores: [
      [-Math.sqrt(200), 0],
      [Math.sqrt(200), 0],
      [0, Math.SQRT2],
      [0, -Math.SQRT2],
      [0, 0],
    ],
  };
  const [first, second] = nearestSamples([10, 0], samples, 2);
  expect(first.name).toBe("right");
  expect(first.distance).toBeCloseTo((Math.sqrt(200) - 10) / 10, 12);
  expect(second).toEqual({ name: "middle", distance: 1 });
});
