import type { Characteristic, Specification } from '@tallystone/contracts/specification/types';
import type { PartitionName, ResultCounts, ResultMetrics } from '@tallystone/contracts/result/types';

/** What passes between the steps of the chain. */

export const OUT = 0;
/** Values of `Prepared.partition`: 0 = not in the sample (excluded). */
export const PARTITIONS: readonly (PartitionName | null)[] = [null, 'development', 'holdOut', 'outOfTime'];
export const DEVELOPMENT = 1;
export const HOLD_OUT = 2;
export const OUT_OF_TIME = 3;

/** Values of `Prepared.outcome`, also of rows that are out. */
export const BAD = 0;
export const GOOD = 1;
export const INDETERMINATE = 2;
export const DECLINED = 3;
export const NO_OUTCOME = 255;

/** The first half of a specification, carried out: who is in the sample, as what. */
export interface Prepared {
  rows: number;
  /** Per row: OUT, DEVELOPMENT, HOLD_OUT or OUT_OF_TIME. */
  partition: Uint8Array;
  /** Per row: GOOD, BAD, INDETERMINATE, DECLINED; NO_OUTCOME where the row is out. */
  outcome: Uint8Array;
  /** Per row: 0 = in; k = taken out by exclusion k (from 1); exclusions + 1 = taken out by its outcome. */
  exclusion: Uint16Array;
  /** Per row; null = all 1. */
  weights: Float64Array | null;
  /** Per row: 1 to K for goods and bads of development, else 0. Null without folds. */
  folds: Uint8Array | null;
  foldCount: number;
  counts: ResultCounts;
}

/** A row in no bin: an unseen category, or a row that is out. */
export const NO_BIN = 255;

export interface Bin {
  label: string;
  kind: 'cut' | 'group' | 'special' | 'missing';
}

/** One characteristic of the code matrix. */
export interface CodedCharacteristic {
  characteristic: Characteristic;
  /** In the specification's order; empty for "linear". */
  bins: Bin[];
  /** One byte per row, NO_BIN = no bin; null for "linear". */
  codes: Uint8Array | null;
  /** For "linear": the value per row (NaN where the row is out). */
  values: Float64Array | null;
}

export interface CodeMatrix {
  rows: number;
  characteristics: CodedCharacteristic[];
}

/** Which column of the design a coefficient belongs to. */
export type Term =
  | { characteristic: number; kind: 'woe' }
  | { characteristic: number; kind: 'bin'; bin: number }
  | { characteristic: number; kind: 'linear' };

/** A linear predictor: eta = intercept + sum over terms. */
export interface Model {
  intercept: number;
  /** One per term. */
  coefficients: Float64Array;
}

/** All figures of one partition; null without rows or with one class only. */
export type PartitionMetrics = ResultMetrics | null;

export interface ReplayInput {
  specification: Specification;
  specificationSha256: string;
  dataSha256: string;
}
