import { describe, expect, test } from "vitest";
import { type Drift, driftCondition, followDrift, outlookOf } from "../../../core/alarms/index.ts";
import type { DriftingWatch } from "../../../core/limit-set/index.ts";
import { seededRandom } from "../../../core/pls/index.ts";

const minute = 60_000;
const watch: DriftingWatch = {
  kind: "drifting",
  timeConstantMinutes: 10,
  withinMinutes: 60,
  fromRatio: 0.5,
  deadband: 0.5,
};
const tau = watch.timeConstantMinutes * minute;

/** The ratio minute by minute (or at these times) through the detector; what it says last, and what it knows. */
function run(ratioAt: (minutes: number) => number, times: readonly number[]) {
  let drift: Drift | undefined;
  let ratio = Number.NaN;
  for (const t of times) {
    ratio = ratioAt(t);
    drift = followDrift(drift, ratio, t * minute, tau);
  }
  return { drift: drift!, outlook: outlookOf(drift!, tau), condition: driftCondition(drift, ratio, watch) };
}
const minutes = (n: number, step = 1) => Array.from({ length: Math.floor(n / step) + 1 }, (_, i) => i * step);
/** doubles in two hours, and is at its limit at the 240th minute */
const growing = (t: number) => 2 ** ((t - 240) / 120);

describe("the drift of Q", () => {
  // Of a straight line, the twice smoothed average lags the once smoothed by as much as that lags the line: level and slope are exact for
  // small steps (Brown's double smoothing). With a step of τ/10 the slope is off by 5 %, with τ/100 by half a percent.
  test.each([
    [1, 0.06],
    [0.1, 0.006],
  ])("a growth by a factor in a time is told with its time to the limit; readings every %f min", (step, tolerance) => {
    const { outlook } = run(growing, minutes(180, step));
    expect(outlook.ratio).toBeCloseTo(growing(180), 6);
    expect(Math.abs(outlook.untilLimitMs / (60 * minute) - 1)).toBeLessThan(tolerance);
  });

  test("the times of the readings count, not their number", () => {
    const random = seededRandom(3);
    const uneven = minutes(180, 0.1).filter((_, i) => i === 1800 || random() < 0.5);
    const { untilLimitMs } = run(growing, uneven).outlook;
    expect(Math.abs(untilLimitMs / (60 * minute) - 1)).toBeLessThan(0.02);
  });

  test("beyond once the limit is less than an hour away, clear while it is further than the deadband", () => {
    expect(run(growing, minutes(140)).condition).toBe("clear"); // 100 min to go
    expect(run(growing, minutes(165)).condition).toBe("between"); // 75: within half an hour's deadband
    expect(run(growing, minutes(190)).condition).toBe("beyond"); // 50
  });

  test("a steady Q never drifts, however close to its limit, and a falling one does not", () => {
    expect(run(() => 0.95, minutes(300)).outlook.untilLimitMs).toBe(Number.POSITIVE_INFINITY);
    expect(run((t) => growing(240 - t), minutes(200)).condition).toBe("clear");
  });

  test("far below its limit it may rise as it likes", () => {
    expect(run((t) => 0.01 * 2 ** (t / 20), minutes(80)).condition).toBe("clear"); // 0.16 of the limit, 53 min away
  });

  test("it has no say until the averages have settled", () => {
    expect(run(() => 0.9, minutes(19)).condition).toBe("none");
    expect(run(() => 0.9, minutes(20)).condition).toBe("clear");
    expect(driftCondition(undefined, 0.5, watch)).toBe("none");
    expect(driftCondition(run(growing, minutes(190)).drift, null, watch)).toBe("none");
  });

  test("a bubble does not look like a trend", () => {
    const { condition, outlook } = run((t) => (t === 100 ? 500 : 0.6), minutes(101));
    expect(condition).toBe("clear");
    expect(outlook.ratio).toBeLessThan(0.75);
  });

  test("what is unfamiliar already needs no forecast, and a clean window ends one", () => {
    const { drift } = run(growing, minutes(230));
    expect(driftCondition(drift, 1.2, watch)).toBe("between");
    expect(driftCondition(drift, 0.9, watch)).toBe("beyond");
    expect(driftCondition(drift, 0.2, watch)).toBe("clear");
  });

  test("noise alone: less than one reading in a hundred of a month of minutes looks like a drift", () => {
    const random = seededRandom(5);
    let drift: Drift | undefined;
    let beyond = 0;
    const n = 30 * 24 * 60;
    for (let t = 0; t < n; t++) {
      const ratio = 0.6 * Math.exp(0.3 * (random() + random() + random() + random() - 2));
      drift = followDrift(drift, ratio, t * minute, tau);
      if (driftCondition(drift, ratio, watch) === "beyond") beyond++;
    }
    expect(beyond / n).toBeLessThan(0.01);
  });
});
