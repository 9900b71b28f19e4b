/** The result of replaying a specification. Pure types, no zod. Key names are fixed by the format, version 1. */

export type PartitionName = 'development' | 'holdOut' | 'outOfTime';

export interface PartitionCounts {
  /** Goods, bads and indeterminates together. */
  rows: number;
  goods: number;
  bads: number;
  indeterminates: number;
  /** Sum of the weights of goods and bads. */
  weight: number;
}

export interface ExclusionCount {
  reason: string;
  rows: number;
  bads: number;
}

export interface ResultCounts {
  development: PartitionCounts;
  holdOut: PartitionCounts;
  outOfTime: PartitionCounts;
  excluded: ExclusionCount[];
  declined: number;
}

export interface ResultBin {
  label: string;
  /** Counted rows of development (with the declined rows that enter by inference). */
  rows: number;
  /** Weighted. */
  goods: number;
  bads: number;
  woe: number;
  /** Only with "indicator" coding: this bin's coefficient. */
  coefficient?: number;
  points: number;
  pointsRounded: number;
}

export interface ResultCharacteristic {
  column: string;
  /** Null for "linear". */
  informationValue: number | null;
  /** Null for "indicator", where each bin has one. */
  coefficient: number | null;
  /** Empty for "linear". */
  bins: ResultBin[];
  csi: { holdOut: number | null; outOfTime: number | null };
}

export interface ResultPathPoint {
  lambda: number;
  intercept: number;
  /** By column; with "indicator" a list, one per bin. */
  coefficients: Record<string, number | number[]>;
  deviance: number;
  optimalityResidual: number;
}

export interface ResultCrossValidation {
  lambda: number[];
  mean: number[];
  standardError: number[];
  /** Indices from 0. */
  minimum: number;
  oneStandardError: number;
  atGridEnd: boolean;
  /** Places on the path where a fold's fit did not reach its tolerance; absent where all did, and where it was not kept. */
  notConverged?: number[];
}

export interface ResultMetrics {
  auc: number;
  /** DeLong; null where weighted. */
  aucStandardError: number | null;
  gini: number;
  ks: number;
  brier: number;
  logLoss: number;
  /** Null where weighted. The p-value is null without degrees of freedom. */
  hosmerLemeshow: { statistic: number | null; groups: number; degreesOfFreedom: number; pValue: number | null } | null;
  calibrationInTheLarge: number | null;
  /** Null where every PD is the same, or good and bad are separated. */
  calibrationSlope: number | null;
  calibrationIntercept: number | null;
  meanScore: number;
  smallestScore: number;
  largestScore: number;
  /** Of the rounded score; null when a "linear" characteristic is kept, as then there is no scorecard. */
  aucRounded: number | null;
  /** Largest distance of rounded and unrounded score. */
  largestRounding: number | null;
}

/** A partition without rows, or with one class only, has null. */
export type MetricsByPartition = Record<PartitionName, ResultMetrics | null>;

export interface BandCounts {
  rows: number;
  goods: number;
  bads: number;
}

/** Lower-closed [from, to); null = open. Counts of rows with known outcome, unweighted. */
export interface ResultBand {
  from: number | null;
  to: number | null;
  development: BandCounts;
  holdOut: BandCounts;
  outOfTime: BandCounts;
}

export interface Result {
  format: 'tallystone-result';
  formatVersion: 1;
  specificationSha256: string;
  dataSha256: string;
  solver: { name: string; version: string };
  counts: ResultCounts;
  characteristics: ResultCharacteristic[];
  /** After refit, recalibration and prior correction, as the coefficients are. The path shows the fits themselves. */
  intercept: number;
  lambda: number;
  mixing: number;
  /** Number of characteristics kept. */
  kept: number;
  objective: number;
  deviance: number;
  optimalityResidual: number;
  converged: boolean;
  basePoints: number;
  path: ResultPathPoint[];
  crossValidation: ResultCrossValidation | null;
  metrics: MetricsByPartition;
  weightedMetrics: MetricsByPartition | null;
  bands: ResultBand[];
  psi: { holdOut: number | null; outOfTime: number | null };
}
