import type { BinSpec } from './german-bins';

/** The shape of expected/german_end_to_end.json, as far as it is read. */
export interface E2eMetrics {
  readonly auc: number;
  readonly gini: number;
  readonly auc_se_delong: number;
  readonly auc_ci95_delong: [number, number];
  readonly ks: number;
  readonly ks_at_p_bad: number;
  readonly ks_at_score: number;
  readonly brier: number;
  readonly logloss: number;
  readonly mean_p: number;
  readonly bad_rate: number;
  readonly hl_quantile10: {
    readonly groups: number;
    readonly table_n_obs_exp: [number, number, number][];
    readonly chi2: number;
    readonly df: number;
    readonly p_value: number;
  };
  readonly auc_rounded_score: number;
  readonly mean_score: number;
  readonly distinct_eta: number;
  readonly calibration_in_the_large: number;
  readonly calibration_slope: { readonly intercept: number; readonly slope: number; readonly se_slope: number };
  readonly spiegelhalter_z: number;
}

export interface E2eFit {
  readonly fit: { readonly alpha: number; readonly lambda: number; readonly standardize: boolean; readonly upper0?: boolean };
  readonly intercept: number;
  readonly coef: Record<string, number>;
  readonly nonzero: string[];
  readonly objective: number;
  readonly kkt_max: number;
  readonly factor: number;
  readonly offset: number;
  readonly base_points_A: number;
  readonly points: Record<
    string,
    { readonly labels: string[]; readonly A: number[]; readonly B: number[]; readonly B_rounded: number[] }
  >;
  readonly first_test_rows: {
    readonly row: number;
    readonly eta: number;
    readonly p_bad: number;
    readonly score: number;
    readonly rounded_score: number;
  }[];
  readonly metrics: { readonly train: E2eMetrics; readonly test: E2eMetrics };
  readonly psi_score: {
    readonly edges: number[];
    readonly train_counts: number[];
    readonly test_counts: number[];
    readonly psi: number | null;
  };
  readonly psi_score_train_deciles: {
    readonly edges_type7: number[];
    readonly train_counts: number[];
    readonly test_counts: number[];
    readonly psi: number;
  };
  readonly test_band_table: { readonly n: number; readonly bad: number }[];
  readonly cutoff_at_600: { readonly approved_test: number; readonly bad_among_approved: number };
  readonly adverse_impact: {
    readonly cutoff: number;
    readonly n_group: number;
    readonly n_reference: number;
    readonly rate_group: number;
    readonly rate_reference: number;
    readonly ratio: number;
  };
}

export interface E2e {
  readonly n_train: number;
  readonly n_test: number;
  readonly bads_train: number;
  readonly bads_test: number;
  readonly pdo: number;
  readonly odds: number;
  readonly score: number;
  readonly bins: Record<
    string,
    {
      readonly spec: BinSpec;
      readonly table: {
        readonly label: string;
        readonly good: number;
        readonly bad: number;
        readonly woe: number;
        readonly iv: number;
        readonly n_test: number;
      }[];
      readonly iv: number;
      readonly csi_train_test: number;
    }
  >;
  readonly paired_delong_test_fit0_vs_fit1: {
    readonly auc: number[];
    readonly cov: number[][];
    readonly z: number;
    readonly p: number;
  };
  readonly vif_train_classical: Record<string, number>;
  readonly fits: E2eFit[];
}
