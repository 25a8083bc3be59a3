import betaOf from "@stdlib/stats-base-dists-beta-quantile";
import fOf from "@stdlib/stats-base-dists-f-quantile";
import normalOf from "@stdlib/stats-base-dists-normal-quantile";
import tOf from "@stdlib/stats-base-dists-t-quantile";
import { chiSquaredQuantileOf } from "./chi-squared-quantile.ts";
import { LimitError } from "./limit-error.ts";

// Each gives the value below which a share `p` of the distribution lies. Checked against 60-digit arithmetic: test/reference/quantiles.test.ts.

export function normalQuantile(p: number): number {
  return checked("normal", p, normalOf(p, 0, 1));
}

export function tQuantile(p: number, freedom: number): number {
  return checked("t", p, tOf(p, freedom));
}

export function fQuantile(p: number, numerator: number, denominator: number): number {
  return checked("F", p, fOf(p, numerator, denominator));
}

export function betaQuantile(p: number, a: number, b: number): number {
  return checked("beta", p, betaOf(p, a, b));
}

export function chiSquaredQuantile(p: number, freedom: number): number {
  return checked("χ²", p, chiSquaredQuantileOf(p, freedom));
}

function checked(name: string, p: number, found: number): number {
  if (p > 0 && p < 1 && Number.isFinite(found)) return found;
  throw new LimitError(`the quantile of the ${name} distribution`, {
    got: `${found} at ${p}`,
    expected: "a confidence between 0 and 1, and degrees of freedom above 0",
    todo: "Correct the confidence, or take more samples or fewer components.",
  });
}
