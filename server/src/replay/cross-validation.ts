import {
  deviance,
  fastCrossValidation,
  fastPath,
  linearPredictor,
  summarise,
  type CrossValidation,
  type EngineChoice,
  type Fit,
  type FitProblem,
  type FoldFailure,
  type FoldResult,
} from '@tallystone/numeric';
import type { Specification } from '@tallystone/contracts/specification/types';
import { byCode, penaltyOf } from './design';
import type { FitRows } from './fit-rows';
import { foldClassing, type FoldBins, type FoldClassing } from './fold-classing';
import { gather, gatherNumbers, placesOf } from './gather';
import type { ColumnSource } from './source';
import type { CodeMatrix, Term } from './types';

export type CrossValidated = Omit<CrossValidation, 'optimalityResidual' | 'converged'>;

/** Largest optimality residual of a fold's fit where the oracle fits it (1e-6 is enough for folds; this leaves room). */
const FOLD_TOLERANCE = 1e-8;

export interface CrossValidationInput {
  spec: Specification;
  coded: CodeMatrix;
  fitRows: FitRows;
  source: ColumnSource | null;
  terms: readonly Term[];
  problem: FitProblem;
  lambdas: readonly number[];
  /** Fits of all rows at the lambdas. */
  fits: readonly Fit[];
  mixing: number;
  onFold?: (done: number, count: number) => void;
  crewFor?: EngineChoice['crewFor'];
}

/**
 * Cross-validation with the classing that the specification asks for. Inferred rows are always training rows and never held out:
 * a fold is judged on known outcomes only.
 */
export function crossValidated(input: CrossValidationInput): { result: CrossValidated; heldByHand: number } {
  const { spec, coded, fitRows, source, terms, problem, lambdas } = input;
  const folds = fitRows.folds ?? new Uint8Array(fitRows.rows.length);
  const classing = spec.fit.folds?.classing ?? 'once';
  const classed = classing === 'once' ? null : foldClassing(spec, coded, fitRows, source);
  const newBins =
    classing === 'cuts' && coded.characteristics.some(({ characteristic }) => characteristic.coding === 'indicator');
  if (fitRows.known === fitRows.rows.length && !newBins) {
    const columnsForFold =
      classed === null
        ? undefined
        : (fold: number, training: Uint8Array) => columnsOf(terms, classed.classed(fold, training), problem);
    const count = folds.reduce((most, fold) => Math.max(most, fold), 0);
    const options = {
      tolerance: FOLD_TOLERANCE,
      path: input.fits,
      onFold: input.onFold,
      onProgress: (share: number) => input.onFold?.(share * count, count),
      crewFor: input.crewFor,
      ...(columnsForFold === undefined ? {} : { columnsForFold }),
    };
    return { result: fastCrossValidation(problem, folds, lambdas, options), heldByHand: classed?.heldByHand ?? 0 };
  }
  return { result: foldByFold(input, folds, classed), heldByHand: classed?.heldByHand ?? 0 };
}

function columnsOf(terms: readonly Term[], bins: readonly FoldBins[], problem: FitProblem): Float64Array[] {
  return terms.map((term, index) => {
    const { codes, table } = bins[term.characteristic];
    if (codes === null) return problem.columns[index];
    const contributions = byCode(term, table);
    return gatherNumbers(contributions, codes);
  });
}

/** The plain loop, where folds have designs of their own or some rows are never held out. */
function foldByFold(input: CrossValidationInput, folds: Uint8Array, classed: FoldClassing | null): CrossValidated {
  const { spec, coded, fitRows, terms, problem, lambdas, mixing } = input;
  const count = folds.reduce((most, fold) => Math.max(most, fold), 0);
  const results: FoldResult[] = [];
  const failures: FoldFailure[] = [];
  for (let fold = 1; fold <= count; fold++) {
    const training = folds.map((other) => (other === fold ? 0 : 1));
    const bins = classed?.classed(fold, training) ?? null;
    const foldTerms = bins === null ? terms : foldTermsOf(terms, bins, coded);
    const columns = bins === null ? problem.columns : columnsOf(foldTerms, bins, linearColumns(foldTerms, terms, problem));
    const penalty = bins === null ? problem.penalty : penaltyOf(spec, coded, foldTerms, mixing);
    const inside = placesOf(training, 1);
    const outside = placesOf(training, 0);
    const part: FitProblem = {
      columns: columns.map((column) => gatherNumbers(column, inside)),
      outcome: gather(fitRows.outcome, inside),
      ...(fitRows.weights === null ? {} : { weights: gatherNumbers(fitRows.weights, inside) }),
      penalty,
    };
    const heldColumns = columns.map((column) => gatherNumbers(column, outside));
    const heldOutcome = gather(fitRows.outcome, outside);
    const heldWeights = fitRows.weights === null ? undefined : gatherNumbers(fitRows.weights, outside);
    const weight = heldWeights === undefined ? outside.length : heldWeights.reduce((sum, value) => sum + value, 0);
    const { fits } = fastPath(part, { lambdas }, { tolerance: FOLD_TOLERANCE, crewFor: input.crewFor });
    fits.forEach(({ status }, index) => {
      if (status !== 'converged') failures.push({ fold, index, status });
    });
    results.push({
      fold,
      weight,
      deviance: fits.map((fit) => {
        const eta =
          heldColumns.length === 0
            ? new Float64Array(outside.length).fill(fit.intercept)
            : linearPredictor(heldColumns, fit.intercept, fit.coefficients);
        return deviance(heldOutcome, eta, heldWeights) / weight;
      }),
    });
    input.onFold?.(fold, count);
  }
  const summary = summarise(lambdas, results);
  return failures.length > 0 ? { ...summary, failures } : summary;
}

/** Places on the path where a fold's fit did not reach its tolerance, in their order. */
export const notConverged = ({ failures = [] }: CrossValidated): number[] =>
  [...new Set(failures.map(({ index }) => index))].sort((a, b) => a - b);

/** Indicators of the fold's own bins; where the full design left out a reference bin, so does the fold. */
function foldTermsOf(terms: readonly Term[], bins: readonly FoldBins[], coded: CodeMatrix): Term[] {
  return coded.characteristics.flatMap(({ characteristic, bins: all }, index): Term[] => {
    const own = terms.filter((term) => term.characteristic === index);
    if (characteristic.coding !== 'indicator') return own;
    const rows = bins[index].table?.rows ?? new Float64Array(0);
    const reference = own.length < all.length ? rows.findIndex((value) => value > 0) : -1;
    return Array.from(rows, (_, bin) => ({ characteristic: index, kind: 'bin' as const, bin })).filter(
      (term) => term.bin !== reference,
    );
  });
}

/** Columns by the fold's term order, for "linear" terms, which every fold shares. */
function linearColumns(foldTerms: readonly Term[], terms: readonly Term[], problem: FitProblem): FitProblem {
  const columns = foldTerms.map((term) => {
    const place = terms.findIndex((other) => other.characteristic === term.characteristic);
    return problem.columns[place];
  });
  return { ...problem, columns };
}
