import { describe, expect, test } from "vitest";
import { notices, type ServiceFacts } from "../../client/app/notices.ts";
import { type FreshnessFacts, freshness, silentAfterMs } from "../../client/data/freshness.ts";

const now = Date.UTC(2026, 11, 1, 14, 5, 50);
const engine = { running: true, source: true, waiting: 0, behindMs: 0 };

describe("whether the newest reading may be taken for the present", () => {
  const well: FreshnessFacts = {
    now,
    linkUp: true,
    heardAt: now - 300,
    engine,
    readingAt: now - 1200,
    receivedAt: now - 1000,
    periodMs: 2000,
  };

  test("it may while readings come, the engine keeps up and the link is up", () => {
    expect(freshness(well)).toEqual({ kind: "fresh" });
  });

  test("there is nothing to be old before the first reading", () => {
    expect(freshness({ ...well, readingAt: null, receivedAt: null })).toEqual({ kind: "none" });
  });

  test.each([
    [{ linkUp: false }, "link lost", "link to the server lost"],
    [{ engine: { ...engine, running: false } }, "engine stopped", "the engine does not run"],
    [{ engine: { ...engine, source: false } }, "source lost", "the broker is not reached"],
    [{ engine: { ...engine, behindMs: 12_000 } }, "engine behind", "the engine is 12 s behind"],
    [{ readingAt: now - 38_000, receivedAt: now - 38_000 }, "silent", "silent for 38 s (a reading is due every 2 s)"],
    [{ readingAt: now - 181_000 }, "late clock", "readings arrive 3 min late"],
  ] as const)("%j is told as %s", (change, because, says) => {
    expect(freshness({ ...well, ...change })).toMatchObject({ kind: "old", because, says });
  });

  test("carries the reading's own time and its age", () => {
    const silent = freshness({ ...well, readingAt: now - 38_000, receivedAt: now - 37_800 });
    expect(silent).toMatchObject({ asOf: now - 38_000, ageMs: 38_000 });
  });

  test.each([500, 1000, 2000, 5000, 60_000])(
    "with a period of %i ms silence is told within 5 s of the missing reading, or a quarter of a long period",
    (periodMs) => {
      const overdue = silentAfterMs(periodMs) - periodMs;
      expect(overdue).toBeLessThanOrEqual(Math.max(4500, periodMs / 4));
      expect(overdue).toBeGreaterThanOrEqual(1000);
    },
  );
});

describe("what every screen says of the service", () => {
  const well: ServiceFacts = {
    now,
    linkUp: true,
    everUp: true,
    heardAt: now - 300,
    clockOffsetMs: 40,
    engine,
    refused: undefined,
  };
  const troubles = (facts: Partial<ServiceFacts>) => notices({ ...well, ...facts }).map(({ says }) => says);

  test("is nothing while all is well", () => {
    expect(notices(well)).toEqual([]);
  });

  test("a lost link, with its age and what to do", () => {
    expect(troubles({ linkUp: false, heardAt: now - 42_000 })[0]).toMatch(
      /^Link to the server lost 42 s ago\. Everything shown is old\..*local panel/,
    );
  });

  test("before the first message it is connecting, not lost", () => {
    expect(troubles({ linkUp: false, everUp: false, heardAt: null })).toEqual(["Connecting to the server …"]);
  });

  test("an engine that is behind, with by how much and how many wait", () => {
    expect(troubles({ engine: { ...engine, behindMs: 9000, waiting: 1204 } })[0]).toMatch(
      /9 s behind: 1\u2009204 readings wait/,
    );
    expect(troubles({ engine: { ...engine, behindMs: 4000, waiting: 3 } })).toEqual([]);
  });

  test("a clock that is off by more than 5 s, and which way", () => {
    expect(troubles({ clockOffsetMs: 61_000 })[0]).toContain("clock is 1 min 1 s behind the server's");
    expect(troubles({ clockOffsetMs: -7000 })[0]).toContain("clock is 7 s ahead of the server's");
    expect(troubles({ clockOffsetMs: 4900 })).toEqual([]);
  });

  test("the engine's own trouble in its own words", () => {
    expect(troubles({ engine: { ...engine, trouble: "The disk is full. Make room." } })).toEqual([
      "The disk is full. Make room.",
    ]);
  });

  test("history that is being judged is news, not trouble", () => {
    const told = notices({ ...well, engine: { ...engine, loading: { stream: "bq-201", done: 12_250, share: 0.31 } } });
    expect(told).toHaveLength(1);
    expect(told[0]).toMatchObject({ weight: "news" });
    expect(told[0].says).toContain("31\u2009%");
  });
});
