import { describe, expect, test } from "vitest";
import {
  type CountedPair,
  findingInShort,
  findingOf,
  findingWords,
  runsOf,
  type Writing,
} from "../../../core/agreement/index.ts";
import { seededRandom } from "../../../core/pls/index.ts";

const hour = 3_600_000;
const start = Date.UTC(2026, 4, 1);
const compared = {
  property: "ethanol",
  unit: "wt%",
  range: [88, 96] as const,
  promised: { rmsecv: 0.2, freedom: 80 },
};
const write: Writing = {
  difference: (value) => `${value > 0 ? "+" : ""}${value.toFixed(2)} wt%`,
  size: (value) => `${value.toFixed(2)} wt%`,
  moment: (time) => new Date(time).toISOString().slice(5, 16),
};

/** Nearly normal, by twelve even numbers; standard deviation `size`. */
function errors(n: number, size: number, seed: number): number[] {
  const random = seededRandom(seed);
  return Array.from({ length: n }, () => size * (Array.from({ length: 12 }, random).reduce((a, b) => a + b) - 6));
}

/** Pairs every eight hours, over the calibrated range, with these errors. */
function pairsOf(list: readonly number[]): CountedPair[] {
  const random = seededRandom(5);
  return list.map((e, i) => {
    const laboratory = 89 + 6 * random();
    return { time: start + i * 8 * hour, predicted: laboratory + e, laboratory };
  });
}
const shifted = (n: number, from: number, by: number, seed: number) =>
  errors(n, 0.2, seed).map((e, i) => e + (i >= from ? by : 0));

describe("a shift is found and dated", () => {
  const seeds = Array.from({ length: 200 }, (_, i) => i + 1);

  test("2 σ after 20 pairs: found in 9 of 10 histories with 8 pairs after it, its onset at most 2 pairs off in most", () => {
    const onsets = seeds.map((seed) => runsOf(shifted(28, 20, 0.4, seed)).at(-1)!.first);
    const found = onsets.filter((first) => first > 0);
    expect(found.length).toBeGreaterThan(180);
    expect(found.filter((first) => Math.abs(first - 20) <= 2).length).toBeGreaterThan(140);
  });

  // Run length without cause of k = 0.5, h = 4: 168 (field practice after Montgomery), so a history of 30 pairs is cut now and then.
  test("without a shift 30 pairs are seldom cut", () => {
    const cut = seeds.filter((seed) => runsOf(errors(30, 0.2, seed)).length > 1);
    expect(cut.length).toBeLessThan(20);
  });

  test("one wild pair is no shift", () => {
    const wild = errors(20, 0.2, 3).map((e, i) => (i === 10 ? 4 : e));
    expect(runsOf(wild)).toEqual([{ first: 0, last: 19 }]);
  });

  test("pairs that do not differ at all, and no pairs, are no trouble", () => {
    expect(runsOf([])).toEqual([]);
    expect(runsOf([0.1])).toEqual([{ first: 0, last: 0 }]);
    expect(runsOf([0.1, 0.1, 0.1])).toEqual([{ first: 0, last: 2 }]);
  });
});

describe("a finding in words", () => {
  test("says how large the bias is, since when, how sure that is, and what the scatter does", () => {
    const finding = findingOf(pairsOf(shifted(34, 17, 0.5, 8)), compared);
    const [first, second] = findingWords(finding, write);
    expect(first).toMatch(
      /^Biased by \+0\.[3-7]\d wt% since 05-0[67]T\d\d:00 \(n = \d\d, p <\u00a00\.001\): the predictions lie above the laboratory\./,
    );
    expect(second).toMatch(/^The scatter has not grown \(0\.\d\d wt%; the model's RMSECV is 0\.20 wt%\)\.$/);
    expect(findingInShort(finding, write)).toMatch(/^biased by \+0\.\d\d wt% since 05-0\d/);
  });

  test("tells a bias that came and went from one that holds", () => {
    const list = errors(40, 0.2, 4).map((e, i) => e + (i >= 14 && i < 24 ? 0.6 : 0));
    const said = findingWords(findingOf(pairsOf(list), compared), write);
    expect(said[0]).toMatch(/^No bias:/);
    expect(said.join(" ")).toMatch(
      /Before: biased by \+0\.\d\d wt% from 05-0[4-6]T\d\d:00 to 05-0[7-9]T\d\d:00 \(n = /,
    );
  });

  test("a bias of the whole history does not pass for scatter, grown scatter does not pass for a bias", () => {
    const biased = findingOf(pairsOf(errors(30, 0.2, 2).map((e) => e - 0.5)), compared);
    expect(biased).toMatchObject({ scatterGrown: false, stretches: [{ biased: true, n: 30 }] });
    const scattered = findingOf(pairsOf(errors(30, 0.5, 2)), compared);
    expect(scattered.scatterGrown).toBe(true);
    expect(scattered.stretches.at(-1)!.biased).toBe(false);
    expect(findingWords(scattered, write)[1]).toMatch(/^The scatter has grown/);
  });

  // Stages of a young analyzer: some 15–20 pairs for the first judgement, about 30 for the general one (ASTM D3764 and D6122, from memory).
  test.each([
    [3, "3 pairs count; 12 more make a first judgement."],
    [15, "15 pairs: a first judgement; 15 more, over level and composition, make a full one."],
    [30, "30 pairs: enough for a full judgement where they span level and composition."],
  ])("with %i pairs it says how many are missing", (n, expected) => {
    const said = findingWords(findingOf(pairsOf(errors(n, 0.2, 6)), compared), write).at(-1)!;
    expect(said.startsWith(expected)).toBe(true);
  });

  test("a slope that is not 1 is said, and no pairs at all", () => {
    const sloped = pairsOf(errors(30, 0.1, 9)).map((pair) => ({
      ...pair,
      predicted: 92 + 0.8 * (pair.predicted - 92),
    }));
    expect(findingOf(sloped, compared).slopeOff).toBe(true);
    expect(findingOf(pairsOf(errors(30, 0.1, 9)), compared).slopeOff).toBe(false);
    expect(findingWords(findingOf([], compared), write)).toEqual([expect.stringMatching(/^No pair counts yet/)]);
  });

  test("one pair that stands out is pointed at", () => {
    const odd = errors(20, 0.2, 3).map((e, i) => (i === 10 ? 3 : e));
    expect(findingOf(pairsOf(odd), compared).odd).toBe(1);
    expect(findingOf(pairsOf(errors(20, 0.2, 3)), compared).odd).toBe(0);
  });
});
