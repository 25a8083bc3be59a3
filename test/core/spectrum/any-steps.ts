import fc from "fast-check";
import type { Step } from "../../../core/spectrum/index.ts";

/** Steps in an order that makes sense, for an even axis of 60 channels from 1000 nm, every 10 nm. */
export const anySteps: fc.Arbitrary<Step[]> = fc
  .tuple(
    fc.subarray<"snv" | "normalise" | "offset" | "offset range" | "detrend">(
      ["snv", "normalise", "offset", "offset range", "detrend"],
      { maxLength: 3 },
    ),
    fc.option(fc.constant("msc" as const), { nil: undefined }),
    fc.option(
      fc.record({
        half: fc.integer({ min: 2, max: 9 }),
        order: fc.integer({ min: 0, max: 4 }),
        derivative: fc.integer({ min: 0, max: 2 }),
      }),
      {
        nil: undefined,
      },
    ),
    fc.option(
      fc.constantFrom<[number, number][]>(
        [[1100, 1300]],
        [
          [1050, 1200],
          [1300, 1500],
        ],
      ),
      { nil: undefined },
    ),
    fc.constantFrom("center", "center; scale", "scale; center", "detrend", ""),
  )
  .map(([spectrumwise, msc, filter, ranges, end]) => {
    const steps: Step[] = spectrumwise.map((name) => {
      if (name === "normalise") return { step: "normalise", by: "length" };
      if (name === "offset range") return { step: "offset", range: [1000, 1100] };
      return name === "detrend" ? { step: "detrend", order: 1 } : { step: name };
    });
    if (msc) steps.unshift({ step: "msc" });
    if (filter) {
      const window = 2 * filter.half + 1;
      const order = Math.min(filter.order, window - 2);
      steps.push({ step: "savitzky-golay", window, order, derivative: Math.min(filter.derivative, order) });
    }
    if (ranges) steps.push({ step: "select", ranges });
    if (end === "detrend") steps.push({ step: "detrend", order: 2 });
    else for (const step of end.split("; ")) if (step) steps.push({ step: step as "center" | "scale" });
    return steps;
  });
