import type { StatisticChoice } from "../../core/limits/index.ts";
import type { Model } from "../../core/model/index.ts";
import type { Calibration, Diagnostics } from "../../core/pls/index.ts";
import type { TestSet } from "./prediction-picture.ts";

export interface ReportInput {
  calibration: Calibration;
  /** as it was written: with RMSEP where there is a test set */
  model: Model;
  diagnostics: Diagnostics;
  choice: StatisticChoice;
  limits: { t2: number; q: number; nearest: number };
  confidence: number;
  warnings: readonly string[];
  test?: TestSet;
}
