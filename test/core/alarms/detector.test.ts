import { describe, expect, test } from "vitest";
import { afterGap, type Condition, type DetectorState, detect, restingDetector } from "../../../core/alarms/index.ts";
import type { Delay } from "../../../core/limit-set/index.ts";

/** One letter a reading: b beyond, d within the deadband, c clear, n no say. Readings come every 10 s. Returns what each one signalled. */
function run(letters: string, onDelay: Delay, offDelay: Delay = { readings: 2 }, from = restingDetector) {
  const conditions: Record<string, Condition> = { b: "beyond", d: "between", c: "clear", n: "none" };
  let state: DetectorState = from;
  const signals = [...letters].map((letter, i) => {
    const [next, signal] = detect(state, conditions[letter], i * 10_000, { onDelay, offDelay });
    state = next;
    return signal.kind === "raise" ? "R" : signal.kind === "clear" ? "C" : ".";
  });
  return { signals: signals.join(""), state };
}

describe("on- and off-delay", () => {
  test.each([
    ["three in a row raise", "bbb", "..R"],
    ["a bubble does not", "cbcc", "...."],
    ["two bubbles with a good reading between do not", "bbcbb", "....."],
    ["two clear readings end it", "bbbccc", "..R.C."],
    ["a reading within the deadband does not end it", "bbbdddcc", "..R....C"],
    ["a reading within the deadband does not raise it", "bbddb", "....."],
    ["the run of clear readings begins anew after one beyond", "bbbcbcc", "..R...C"],
    ["a reading without a say changes nothing", "bnbnb", "....R"],
    ["raised once, not again while it holds", "bbbbbb", "..R..."],
    ["after it has cleared it can be raised again", "bbbccbbb", "..R.C..R"],
  ])("%s", (_, letters, expected) => {
    expect(run(letters, { readings: 3 }).signals).toBe(expected);
  });

  test("k of n: three of the last five", () => {
    expect(run("bcbcb", { readings: 3, of: 5 }).signals).toBe("....R");
    expect(run("bcccbcb", { readings: 3, of: 5 }).signals).toBe(".......");
  });

  test("a delay in seconds counts process time from the first reading of the run", () => {
    expect(run("bbbbb", { readings: 2, seconds: 30 }).signals).toBe("...R.");
    expect(run("bbbcccc", { readings: 3 }, { readings: 1, seconds: 20 }).signals).toBe("..R..C.");
  });

  test("a gap in the data breaks a run, but not a decided alarm", () => {
    const { state } = run("bb", { readings: 3 });
    expect(run("bb", { readings: 3 }, { readings: 2 }, afterGap(state)).signals).toBe("..");
    const { state: raised } = run("bbbc", { readings: 3 });
    expect(run("cc", { readings: 3 }, { readings: 2 }, afterGap(raised)).signals).toBe(".C");
  });

  // Independent samples, p = 0.5, n in a row: mean readings until raised = (1 − pⁿ)/((1 − p) pⁿ): 2, 6, 14 for n = 1, 2, 3.
  // Source: the run-length formula for n in a row as used by Adnan, Izadi & Chen, J. Process Control 21 (2011) 1318.
  test.each([
    [1, 2],
    [2, 6],
    [3, 14],
  ])("%i in a row is met after %i readings on average when half of them are beyond", (n, expected) => {
    let seed = 12345;
    const random = () => {
      seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
      return seed / 2 ** 32;
    };
    const runs = 4000;
    let readings = 0;
    for (let i = 0; i < runs; i++) {
      let state = restingDetector;
      for (let raised = false; !raised; readings++) {
        const condition = random() < 0.5 ? "beyond" : "clear";
        const [next, signal] = detect(state, condition, 0, { onDelay: { readings: n }, offDelay: { readings: 1 } });
        state = next;
        raised = signal.kind === "raise";
      }
    }
    // The run length's standard deviation is below its mean, so the mean of 4000 lies within 5 % of it in all but 0.2 % of seeds.
    expect(readings / runs / expected).toBeGreaterThan(0.95);
    expect(readings / runs / expected).toBeLessThan(1.05);
  });
});
