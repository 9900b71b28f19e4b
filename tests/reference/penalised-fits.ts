import type { FitProblem } from '@tallystone/numeric';
import { Table, expected } from './reference-data';

/**
 * Source of the numbers: glmnet 4.1-6 (Debian r-cran-glmnet) at threshold 1e-26 and an independent Newton solve on the active set, which agree to
 * 1.2e-11; expected/penalised_logistic_fits.json, generators/penalised_fits.R.
 */
export interface ReferencePoint {
  readonly lambda: number;
  readonly intercept: number;
  readonly coef: number[];
  readonly objective: number;
  readonly deviance: number;
  readonly nonzero: number;
  readonly dev_ratio: number;
  readonly glmnet_deviance: number;
  /** Optimality residual of these coefficients, by the program that made them. */
  readonly kkt_max: number;
}

export interface ReferenceFit {
  readonly id: string;
  readonly data: string;
  readonly x: string[];
  readonly y: string;
  readonly alpha: number;
  readonly standardize: boolean;
  readonly weights: string;
  readonly offset: string | null;
  readonly lower_limits: number | null;
  readonly upper_limits: number | null;
  readonly n: number;
  readonly penalty_factor_given?: number[] | null;
  readonly penalty_factor_used: number[] | null;
  readonly null_deviance: number;
  readonly glmnet_nulldev: number;
  readonly lambda_path: ReferencePoint[];
}

export const referenceFits = expected<{ fits: ReferenceFit[] }>('penalised_logistic_fits.json').fits;

/** Rows of these files may not be passed on, so their fits cannot be made again here. */
export const needOtherData = [
  'saheart_a1_std1',
  'saheart_a0.5_std1',
  'saheart_a0_std1',
  'uci_raw23_a1_std1',
  'uci_raw23_a0.5_std1',
  'uci_raw23_a0_std1',
];

const tables = new Map<string, Table>();

export function tableOf(name: string): Table {
  const table = tables.get(name) ?? new Table(name);
  tables.set(name, table);
  return table;
}

/** The files weigh by a rule in words. */
function weightsOf(fit: ReferenceFit, event: Float64Array): Float64Array | undefined {
  if (fit.weights === 'all 1') return undefined;
  if (fit.weights.startsWith('weight of 1-based row i = (i mod 3)+1')) return event.map((_, i) => ((i + 1) % 3) + 1);
  if (fit.weights.startsWith('prior correction to event rate 5%')) {
    const rate = event.reduce((sum, value) => sum + value, 0) / event.length;
    return event.map((value) => (value === 1 ? 0.05 / rate : 0.95 / (1 - rate)));
  }
  throw new Error(`unknown weights: ${fit.weights}`);
}

/**
 * The reference problem in the orientation of this project: y = 1 good, eta = ln(good:bad). Where the reference fits the event, coefficients change
 * sign (`sign` -1) and limits change sides.
 */
export function problemOf(fit: ReferenceFit, tables = tableOf): { problem: FitProblem; sign: 1 | -1 } {
  const table = tables(fit.data);
  const columns = fit.x.map((name) => table.numbers(name));
  const fitsGood = fit.y.startsWith('good');
  const event = table.numbers(fitsGood ? 'bad' : fit.y);
  const sign = fitsGood ? 1 : -1;
  const limit = (value: number | null): Float64Array | undefined =>
    value === null ? undefined : new Float64Array(columns.length).fill(sign * value);
  const lower = limit(fitsGood ? fit.lower_limits : fit.upper_limits);
  const upper = limit(fitsGood ? fit.upper_limits : fit.lower_limits);
  if (fit.offset && !fit.offset.startsWith('offset_i = -1 * WOE(checking)_i')) throw new Error(`unknown offset: ${fit.offset}`);
  const problem: FitProblem = {
    columns,
    outcome: Uint8Array.from(event, (value) => 1 - value),
    weights: weightsOf(fit, event),
    // The reference's offset is for the event; its negative is the WOE itself.
    offset: fit.offset ? tableOf('data/german_credit_woe.csv').numbers('checking') : undefined,
    penalty: {
      mixing: fit.alpha,
      standardize: fit.standardize,
      multipliers: fit.penalty_factor_used ? Float64Array.from(fit.penalty_factor_used) : undefined,
      lower,
      upper,
    },
  };
  return { problem, sign };
}
