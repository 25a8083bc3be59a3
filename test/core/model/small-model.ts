import type { Model } from "../../../core/model/index.ts";
import { calibrate, leaveOneOut } from "../../../core/pls/index.ts";
import { parseSteps } from "../../../core/spectrum/index.ts";
import { inventedSpectra } from "../../bench/invented-spectra.ts";

/** A whole model, small: 12 samples, 21 channels, 2 components. A new copy each time, for tests that damage it. */
export function smallModel(): Model {
  const { model } = calibrate(inventedSpectra(12, 21, { ingredients: 3 }), {
    name: "small",
    created: "2026-01-01T00:00:00Z",
    steps: parseSteps("snv; center"),
    components: 2,
    mostComponents: 3,
    segments: leaveOneOut(12),
    validation: "loo",
  });
  return model;
}
