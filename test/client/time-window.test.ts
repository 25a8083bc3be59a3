import { describe, expect, test } from "vitest";
import {
  between,
  centredOn,
  edges,
  longestMs,
  pan,
  shortestMs,
  stopAt,
  stretchAbout,
  type TimeWindow,
  zoom,
} from "../../client/data/time-window.ts";

const hour = 3_600_000;
const now = Date.UTC(2026, 11, 1, 12);
const live: TimeWindow = { kind: "live", spanMs: hour };
const stopped: TimeWindow = { kind: "stopped", from: now - 4 * hour, to: now - 3 * hour };

test("a live window ends at the present", () => {
  expect(edges(live, now)).toEqual({ from: now - hour, to: now });
});

describe("panning", () => {
  test("into the past stops the window, keeping its span", () => {
    expect(pan(live, -0.5, now)).toEqual({ kind: "stopped", from: now - 1.5 * hour, to: now - 0.5 * hour });
  });

  test("to the present or beyond is live again: no window ever shows the future", () => {
    expect(pan(stopped, 3, now)).toEqual(live);
    expect(pan(stopped, 30, now)).toEqual(live);
    expect(pan(stopped, 2.9, now).kind).toBe("stopped");
  });
});

describe("zooming", () => {
  test("a live window stays live, wherever the pointer is", () => {
    expect(zoom(live, 0.5, now - hour, now)).toEqual({ kind: "live", spanMs: hour / 2 });
  });

  test("a stopped window keeps the moment under the pointer where it is", () => {
    const about = stopped.from + hour / 4;
    const closer = zoom(stopped, 0.5, about, now);
    const { from, to } = edges(closer, now);
    expect(to - from).toBe(hour / 2);
    expect((about - from) / (to - from)).toBeCloseTo(0.25, 10);
  });

  test("a stopped window that would pass the present becomes live", () => {
    expect(zoom(stopped, 8, stopped.from, now)).toEqual({ kind: "live", spanMs: 8 * hour });
  });

  test("stays between one minute and four hundred days", () => {
    expect(zoom(live, 1e-9, now, now)).toEqual({ kind: "live", spanMs: shortestMs });
    expect(zoom(live, 1e9, now, now)).toEqual({ kind: "live", spanMs: longestMs });
  });
});

describe("a window that has begun at a fixed moment", () => {
  const since: TimeWindow = { kind: "since", from: now - 3 * hour };
  test("grows with the present", () => {
    expect(edges(since, now)).toEqual({ from: now - 3 * hour, to: now });
    expect(edges(since, now + hour)).toEqual({ from: now - 3 * hour, to: now + hour });
  });
  test("shows a minute at least, also at its very beginning", () => {
    expect(edges({ kind: "since", from: now }, now)).toEqual({ from: now - shortestMs, to: now });
  });
  test("slides on when it is zoomed, stops when it is panned", () => {
    expect(zoom(since, 0.5, now - 2 * hour, now)).toEqual({ kind: "live", spanMs: 1.5 * hour });
    expect(pan(since, -1, now)).toEqual({ kind: "stopped", from: now - 6 * hour, to: now - 3 * hour });
  });
  test("is what a typed range is that ends now or later", () => {
    expect(between(now - 3 * hour, now + hour, now)).toEqual(since);
    expect(between(now - 3 * hour, now - hour, now)).toEqual({ kind: "stopped", from: now - 3 * hour, to: now - hour });
  });
});

test("the stretch that is asked for holds the window, is at most four times as long, and seldom changes", () => {
  const asked = new Set<string>();
  for (let i = 0; i < 1000; i++) {
    const window = { from: now - hour * (1 + i / 4000) + i * 500, to: now + i * 500 };
    const { from, to } = stretchAbout(window);
    expect(from).toBeLessThanOrEqual(window.from);
    expect(to).toBeGreaterThanOrEqual(window.to);
    expect(to - from).toBeLessThanOrEqual(4 * (window.to - window.from));
    asked.add(`${from} ${to}`);
  }
  expect(asked.size).toBeLessThan(6);
});

test("stopping keeps what is on the screen", () => {
  expect(edges(stopAt(live, now), now + 5000)).toEqual(edges(live, now));
});

test("a window about a moment has it in its middle, unless the present is too near", () => {
  expect(centredOn(live, now - 5 * hour, now)).toEqual({
    kind: "stopped",
    from: now - 5.5 * hour,
    to: now - 4.5 * hour,
  });
  expect(centredOn(live, now, now)).toEqual({ kind: "stopped", from: now - hour, to: now });
});
