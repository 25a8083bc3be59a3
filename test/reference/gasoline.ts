import { readFileSync } from "node:fs";
import type { CalibrationSet } from "../../core/pls/index.ts";
import { parseTable } from "../../core/spectrum/index.ts";
import { referenceJson } from "./reference-json.ts";

/** The gasoline spectra and R's figures for them: see README.md beside this. Rows 1–50 are to fit, 51–60 to test. */
export const gasolineFile = new URL("data/gasoline-nir.csv", import.meta.url);
const table = parseTable(readFileSync(gasolineFile, "utf8"), "gasoline-nir.csv", "nm");

export const gasoline = setOf(0, 50);
export const gasolineTest = setOf(50, 60);

function setOf(from: number, to: number): CalibrationSet {
  const rows = table.rows.slice(from, to);
  return {
    spectra: {
      axis: table.header.axis,
      rows: rows.map(({ values }) => values),
      names: rows.map(({ sample }) => sample),
    },
    y: rows.map(({ references }) => Float64Array.of(references["octane"])),
    propertyNames: ["octane"],
  };
}

interface GasolinePls {
  x_mean: number[];
  y_mean: number;
  /** rows: channels (W, P, R), responses (Q) or samples (T, U); columns: components */
  oscorespls: Record<"W" | "P" | "R" | "Q" | "T" | "U" | "coef_by_ncomp", number[][]> & {
    intercept_by_ncomp: number[];
  };
  simpls: { coef_by_ncomp: number[][] };
  explained_x_variance: { percent_cumulative: number[] };
  explained_y_variance: { percent_cumulative: number[] };
  predicted_test_by_ncomp: number[][];
  loo_predicted_by_ncomp: number[][];
  rmsep: { loo_cv: number[]; test: number[]; train: number[] };
  published: {
    rmsep_loo_cv_0_to_10: number[];
    rmsep_test_0_to_10: number[];
    explained_x_percent_cumulative_1_to_10: number[];
    explained_y_percent_cumulative_1_to_10: number[];
    predicted_test_2_comps_rows_51_to_60: number[];
    predicted_test_3_comps_rows_51_to_55: number[];
  };
}
export const gasolinePls = referenceJson<GasolinePls>("gasoline-pls.json");

interface MonitoringLimits {
  T2_limit_F: number;
  T2_limit_beta: number;
  T2_limit_chi2: number;
  Q_limit_jackson_mudholkar: number;
  Q_limit_box_moments: number;
  Q_limit_box_theta: number;
  Q_limit_empirical: number;
}
interface Combined {
  tau2: number;
  delta2: number;
  limit: number;
  phi_test: number[];
}
export interface Monitoring {
  scores_test: number[][];
  T2_train: number[];
  T2_test: number[];
  leverage_with_mean_test: number[];
  Q_train: number[];
  Q_test: number[];
  h0: number;
  residual_eigenvalues_first_10: number[];
  limits: Record<string, MonitoringLimits>;
  combined_index: Record<string, { variant_chi2: Combined; variant_F: Combined }>;
  contributions_test_row_1: { T2_contributions: number[]; Q_contributions: number[]; residual: number[] };
  nearest_neighbour: {
    nn_mahalanobis_test: number[];
    nn_mahalanobis_train: number[];
    train_max_nn_mahalanobis: number;
  };
  prediction_uncertainty: { SEC: number } & Record<"alpha_0.05" | "alpha_0.01", { half_width_test: number[] }>;
}
export const gasolineMonitoring = referenceJson<{ models: Record<string, Monitoring> }>(
  "gasoline-monitoring.json",
).models;
