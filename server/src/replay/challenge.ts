import {
  conditionIndex,
  fitAt,
  fitForeignChallenger,
  MOST_CHALLENGER_ROWS,
  NumericError,
  varianceInflation,
} from '@tallystone/numeric';
import { designColumns } from './design';
import type { Replayed } from './replay';
import type { CodeMatrix, Term } from './types';

/**
 * A second look at the model that was replayed: are the columns kept nearly collinear, and does a library that shares nothing with this one find
 * the same unpenalised fit of them?
 */
export interface Challenge {
  /** Of the columns kept, on all development rows. */
  readonly varianceInflation: readonly {
    readonly column: string;
    /** null = an exact combination of others */ readonly value: number | null;
  }[];
  /** Largest condition index of their correlation matrix; null with fewer than two columns, and where they are exactly collinear. */
  readonly conditionIndex: number | null;
  readonly foreign: ForeignFit | { readonly unavailable: string };
}

/** Unpenalised fits of the same rows and columns by this library and by ml-logistic-regression. */
export interface ForeignFit {
  readonly rows: number;
  /** Of so many development rows; every k-th of them is taken when they are too many for the foreign library. */
  readonly of: number;
  readonly intercept: { readonly own: number; readonly foreign: number };
  readonly coefficients: readonly { readonly column: string; readonly own: number; readonly foreign: number }[];
  readonly largestDifference: number;
}

/** Gradient descent of fixed step reaches about this; agreement beyond it is not to be expected. */
export const FOREIGN_TOLERANCE = 1e-3;

/** @example const { foreign, varianceInflation } = challenge(replay(request)); */
export function challenge({ fitted, coded }: Pick<Replayed, 'fitted' | 'coded'>): Challenge {
  const { fitRows, tables } = fitted.trained;
  const terms = fitted.terms.filter((_, index) => fitted.model.coefficients[index] !== 0);
  if (terms.length === 0)
    return { varianceInflation: [], conditionIndex: null, foreign: { unavailable: 'No characteristic is kept.' } };
  const columns = designColumns(terms, coded, tables, fitRows);
  const names = terms.map((term) => nameOf(term, coded));
  const weights = fitRows.weights ?? undefined;
  const inflation = varianceInflation(columns, weights);
  return {
    varianceInflation: names.map((column, index) => ({ column, value: finite(inflation[index]) })),
    conditionIndex: columns.length < 2 ? null : finite(conditionIndex(columns, weights).largest),
    foreign: weights ? { unavailable: 'The foreign library takes no weights.' } : foreignFit(columns, names, fitRows.outcome),
  };
}

const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);

function nameOf(term: Term, coded: CodeMatrix): string {
  const { characteristic, bins } = coded.characteristics[term.characteristic];
  return term.kind === 'bin' ? `${characteristic.column}, ${bins[term.bin].label}` : characteristic.column;
}

function foreignFit(columns: readonly Float64Array[], names: readonly string[], outcome: Uint8Array): Challenge['foreign'] {
  const step = Math.ceil(outcome.length / MOST_CHALLENGER_ROWS);
  const taken = <T extends Float64Array | Uint8Array>(values: T): T => values.filter((_, row) => row % step === 0) as T;
  const problem = { columns: columns.map(taken), outcome: taken(outcome), penalty: { mixing: 1, standardize: true } };
  try {
    const own = fitAt(problem, 0);
    if (own.status !== 'converged') return { unavailable: `The unpenalised fit has no optimum to compare: ${own.status}.` };
    const foreign = fitForeignChallenger(problem);
    const coefficients = names.map((column, index) => ({
      column,
      own: own.coefficients[index],
      foreign: foreign.coefficients[index],
    }));
    const intercept = { own: own.intercept, foreign: foreign.intercept };
    const differences = [intercept, ...coefficients].map((pair) => Math.abs(pair.own - pair.foreign));
    return {
      rows: problem.outcome.length,
      of: outcome.length,
      intercept,
      coefficients,
      largestDifference: Math.max(...differences),
    };
  } catch (error) {
    if (error instanceof NumericError) return { unavailable: error.message };
    throw error;
  }
}
