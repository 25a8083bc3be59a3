import { expect, test } from "vitest";
import { followNumbering, type Numbering } from "../../../core/judging/sequence-gap.ts";

/** How many are missing before each of these numbers. */
function missingIn(sequences: readonly number[]): number[] {
  let numbering: Numbering | undefined;
  return sequences.map((sequence) => {
    const [next, missing] = followNumbering(numbering, sequence);
    numbering = next;
    return missing;
  });
}
const run = (from: number, count: number) => Array.from({ length: count }, (_, i) => from + i);
const sum = (numbers: readonly number[]) => numbers.reduce((total, n) => total + n, 0);

test("a stream that counts by ones and jumps lacks the numbers between", () => {
  expect(missingIn([...run(7, 12), 25, 26])).toEqual([...Array(12).fill(0), 6, 0]);
});

test("nothing is missed while it is not known how a stream counts, nor where its count begins anew", () => {
  expect(sum(missingIn([1, 100, 50, 1000]))).toBe(0);
  expect(sum(missingIn(run(0, 50).map((i) => 1000 * i)))).toBe(0); // numbered by the clock
  expect(sum(missingIn([...run(500, 20), 0, 1, 2]))).toBe(0);
});

test("a stream that loses again and again says so a few times, not with every reading", () => {
  const halved = missingIn([...run(0, 20), ...run(0, 200).map((i) => 20 + 2 * i)]);
  const said = halved.filter((missing) => missing > 0).length;
  expect(said).toBeGreaterThan(0);
  expect(said).toBeLessThan(5);
});
