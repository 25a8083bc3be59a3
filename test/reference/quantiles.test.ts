// Source: 60-digit arithmetic, compared entry by entry with scipy 1.10.1 and R 4.2.2; printed values of the NIST/SEMATECH e-Handbook tables
// 1.3.6.7.1–4, whose origin (reprint, or from memory) stands with each in data/quantiles.json.
import { describe, expect, test } from "vitest";
import { betaQuantile, chiSquaredQuantile, fQuantile, normalQuantile, tQuantile } from "../../core/limits/index.ts";
import { referenceJson } from "./reference-json.ts";

type Row = [...number[], "upper" | "lower", number, number];
const reference = referenceJson<{
  distributions: Record<string, { quantiles: Row[] }>;
  handbook_table_values: {
    quantiles: {
      dist: string;
      params: number[];
      tail: string;
      prob: number;
      printed: number;
      printed_decimals: number;
      agrees_when_rounded: boolean;
    }[];
  };
}>("quantiles.json");

const quantiles: Record<string, (p: number, ...parameters: number[]) => number> = {
  normal: normalQuantile,
  chi2: chiSquaredQuantile,
  t: tQuantile,
  beta: (p, a, b) => betaQuantile(p, a, b),
  F: (p, a, b) => fQuantile(p, a, b),
};

describe("quantiles, against 60-digit arithmetic", () => {
  test.each(Object.keys(quantiles))("%s, tails from 10⁻⁴, within 1e-8", (name) => {
    const rows = reference.distributions[name].quantiles;
    expect(rows.length).toBeGreaterThan(10);
    for (const row of rows) {
      const [tail, probability, expected] = row.slice(-3) as ["upper" | "lower", number, number];
      const parameters = row.slice(0, -3) as number[];
      const got = quantiles[name](tail === "upper" ? 1 - probability : probability, ...parameters);
      const apart = Math.abs(got / expected - 1);
      if (!(apart <= 1e-8))
        expect.fail(`${name}(${parameters}) ${tail} ${probability}: got ${got}, expected ${expected}, apart ${apart}`);
    }
  });
});

describe("quantiles, against the handbook's printed tables", () => {
  const rows = reference.handbook_table_values.quantiles.filter(({ agrees_when_rounded }) => agrees_when_rounded);
  test.each(rows)(
    "$dist($params) $tail $prob is printed as $printed",
    ({ dist, params, tail, prob, printed, printed_decimals }) => {
      const got = quantiles[dist](tail === "upper" ? 1 - prob : prob, ...params);
      expect(Number(got.toFixed(printed_decimals))).toBe(printed);
    },
  );
});
