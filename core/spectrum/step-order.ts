import { type Step, StepError } from "./step.ts";

const perSpectrum = new Set(["snv", "msc", "offset", "normalise", "detrend"]);

/**
 * Refuses an order of steps that computes something else than its words say.
 *
 * @throws StepError with the two steps and the reason.
 */
export function checkStepOrder(steps: readonly Step[]): void {
  steps.forEach((later, j) => {
    for (const earlier of steps.slice(0, j)) {
      const why = objection(earlier, later);
      if (why === undefined) continue;
      throw new StepError("the order of the steps", {
        got: `${later.step} after ${earlier.step}`,
        expected: why,
        todo: "Change the order, or leave one of the two out.",
      });
    }
  });
}

function objection(earlier: Step, later: Step): string | undefined {
  if (later.step === "absorbance" && earlier.step !== "select") {
    return "absorbance before all but select: the logarithm needs the light itself, which is above zero";
  }
  if ((earlier.step === "center" || earlier.step === "scale") && perSpectrum.has(later.step)) {
    return `${later.step} before ${earlier.step}: it takes the shape of a whole spectrum, which is gone once the channels have been made comparable one by one`;
  }
  if (earlier.step === "scale" && later.step === "savitzky-golay") {
    return "savitzky-golay before scale: it runs over neighbouring channels, which no longer have one unit after scale";
  }
  if (earlier.step === later.step && (later.step === "center" || later.step === "scale" || later.step === "snv")) {
    return `${later.step} once: the second changes nothing`;
  }
  if (isDerivative(earlier) && (later.step === "msc" || later.step === "offset")) {
    return `${later.step} before the derivative, which has removed the level that ${later.step} works on`;
  }
  return undefined;
}

function isDerivative(step: Step): boolean {
  return step.step === "savitzky-golay" && step.derivative > 0;
}
