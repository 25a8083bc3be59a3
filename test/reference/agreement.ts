import { expect } from "vitest";

/** The largest |got − expected|, divided by `scale` or by the largest |expected|. A failure says where it is, and what was got. */
export function expectAgreement(
  got: ArrayLike<number>,
  expected: ArrayLike<number>,
  tolerance: number,
  what: string,
  scale?: number,
): void {
  expect(got.length, `${what}: number of values`).toBe(expected.length);
  let size = scale ?? 0;
  if (scale === undefined) for (let i = 0; i < expected.length; i++) size = Math.max(size, Math.abs(expected[i]));
  for (let i = 0; i < expected.length; i++) {
    const apart = Math.abs(got[i] - expected[i]) / size;
    // not `>`: a NaN must fail
    if (!(apart <= tolerance)) {
      expect.fail(
        `${what}[${i}]: got ${got[i]}, expected ${expected[i]}, apart ${apart} of ${size}, tolerance ${tolerance}`,
      );
    }
  }
}

/** Each value by its own size. */
export function expectEachClose(
  got: ArrayLike<number>,
  expected: ArrayLike<number>,
  tolerance: number,
  what: string,
): void {
  expect(got.length, `${what}: number of values`).toBe(expected.length);
  for (let i = 0; i < expected.length; i++) expectAgreement([got[i]], [expected[i]], tolerance, `${what} (${i})`);
}

export function column(rows: readonly ArrayLike<number>[], k: number): number[] {
  return rows.map((row) => row[k]);
}
