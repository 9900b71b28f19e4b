import { fastFit, fastPath, fitIndependently, NumericError, type EngineChoice, type Fit, type FitProblem, type Grid } from '@tallystone/numeric';
import type { Specification } from '@tallystone/contracts/specification/types';
import { adjusted } from './adjust';
import { crossValidated, type CrossValidated } from './cross-validation';
import { withDeclined } from './declined';
import { designColumns, isUnpenalised, penaltyOf, problemOf, termsOf } from './design';
import { badRate, fitRowsOf, type FitRows } from './fit-rows';
import { joined } from './gather';
import { ReplayError } from './problems';
import type { ColumnSource } from './source';
import { DEVELOPMENT, OUT, type CodeMatrix, type Model, type Prepared, type Term } from './types';
import { woeTables, type WoeTable } from './woe';

/**
 * Largest optimality residual asked of path points and reported fits. Ten times tighter than the 1e-9 a reported fit must reach: the
 * coefficients of flat directions then agree to 1e-8 with other solvers.
 */
const TOLERANCE = 1e-10;

export type Method = 'standard' | 'independent';

export interface FitRequest {
  specification: Specification;
  prepared: Prepared;
  coded: CodeMatrix;
  /** Needed for folds with classing "cuts" only. */
  source?: ColumnSource | null;
  /** "independent": the fit that is reported comes from the second solver; the penalty is chosen by the first. */
  method?: Method;
  /** May throw to stop the work; called between fits. */
  onFit?: (done: number, count: number) => void;
  /** Called with parts of a fold too, where folds are fitted together. */
  onFold?: (done: number, count: number) => void;
  /** Threads to share the work with; the numbers are the same without. */
  crewFor?: EngineChoice['crewFor'];
}

/** Everything before a penalty is chosen, for one mixing. */
export interface TrainedPath {
  mixing: number;
  terms: Term[];
  tables: (WoeTable | null)[];
  fitRows: FitRows;
  problem: FitProblem;
  fits: Fit[];
  stoppedEarly: boolean;
  nullDeviance: number;
  crossValidation: CrossValidated | null;
  /** Characteristics whose bins were held in folds with classing "cuts". */
  heldByHand: number;
}

/** A model on the way to a scorecard. */
export interface FittedModel {
  trained: TrainedPath;
  /** Place on the path. */
  index: number;
  lambda: number;
  /** The fit that is reported: of the path, or its refit. */
  fit: Fit;
  terms: Term[];
  /** After refit, recalibration and prior correction. */
  model: Model;
  /** Which characteristics have a nonzero coefficient. */
  kept: boolean[];
}

/**
 * Trains path and cross-validation for every mixing of the specification.
 * @throws ReplayError for what the data make impossible
 * @example const paths = trainPaths({ specification, prepared, coded });
 */
export function trainPaths(request: FitRequest): TrainedPath[] {
  return guarded(() => {
    const { specification: spec, prepared, coded } = request;
    const fitRows = withDeclined(spec, prepared, coded);
    const tables = woeTables(coded, fitRows, spec.woe);
    const terms = termsOf(coded, tables, isUnpenalised(spec));
    const columns = designColumns(terms, coded, tables, fitRows);
    const mixings = Array.isArray(spec.fit.mixing) ? spec.fit.mixing : [spec.fit.mixing];
    return mixings.map((mixing): TrainedPath => {
      const problem = problemOf(columns, fitRows, penaltyOf(spec, coded, terms, mixing));
      const path = fastPath(problem, gridOf(spec), {
        tolerance: TOLERANCE,
        crewFor: request.crewFor,
        onFit: (_, index, count) => request.onFit?.(index + 1, count),
      });
      const lambdas = path.fits.map((fit) => fit.lambda);
      const validated =
        spec.fit.folds === null
          ? null
          : crossValidated({
              spec,
              coded,
              fitRows,
              source: request.source ?? null,
              terms,
              problem,
              lambdas,
              fits: path.fits,
              mixing,
              onFold: request.onFold,
              crewFor: request.crewFor,
            });
      return {
        mixing,
        terms,
        tables,
        fitRows,
        problem,
        fits: path.fits,
        stoppedEarly: path.stoppedEarly,
        nullDeviance: path.nullDeviance,
        crossValidation: validated?.result ?? null,
        heldByHand: validated?.heldByHand ?? 0,
      };
    });
  });
}

function gridOf(spec: Specification): Grid {
  const { lambda } = spec.fit;
  if ('value' in lambda) return { lambdas: [lambda.value] };
  return 'grid' in lambda ? { lambdas: lambda.grid } : lambda;
}

/** Applies the rule: which path (of the mixings) and which penalty on it. Ties go to the mixing listed first. */
export function choosePenalty(spec: Specification, paths: readonly TrainedPath[]): { path: TrainedPath; index: number } {
  const rule = spec.fit.choose;
  const candidates = paths.map((path) => {
    const validated = path.crossValidation;
    const index =
      rule === 'value' || validated === null
        ? path.fits.length - 1
        : rule === 'minimum'
          ? validated.minimum
          : validated.oneStandardError;
    return { path, index, deviance: validated?.mean[index] ?? 0 };
  });
  return candidates.reduce((best, other) => (other.deviance < best.deviance ? other : best));
}

/**
 * Completes the model at one place of a path: the fit itself (or the second solver's), refit, recalibration, prior correction.
 * The place may be any, not only the one the rule chose: this is how a person's choice on the path becomes a model.
 */
export function finishFit(request: FitRequest, trained: TrainedPath, index: number): FittedModel {
  return guarded(() => {
    const { specification: spec, prepared, coded } = request;
    const { lambda } = trained.fits[index];
    const independent = request.method === 'independent';
    const solve = (problem: FitProblem, at: number): Fit =>
      independent ? fitIndependently(problem, at, { tolerance: TOLERANCE }) : fastFit(problem, at, { tolerance: TOLERANCE, crewFor: request.crewFor });
    let fit = independent ? solve(trained.problem, lambda) : trained.fits[index];
    let { terms } = trained;
    let rows = trained.fitRows;
    let kept = keptOf(fit, terms, coded);
    if (spec.fit.refit === 'kept') {
      const wanted = new Set(kept.flatMap((one, place) => (one ? [place] : [])));
      terms = termsOf(coded, trained.tables, true, wanted);
      fit = solve(
        problemOf(designColumns(terms, coded, trained.tables, rows), rows, penaltyOf(spec, coded, terms, trained.mixing)),
        0,
      );
      kept = keptOf(fit, terms, coded);
    } else if (spec.fit.refit === 'all-rows') {
      rows = withOtherPartitions(prepared, trained.fitRows);
      fit = solve(problemOf(designColumns(terms, coded, trained.tables, rows), rows, trained.problem.penalty), lambda);
      kept = keptOf(fit, terms, coded);
    }
    const model = adjusted({ spec, prepared, coded, terms, tables: trained.tables, fit, badRateOfFit: badRate(rows) });
    return { trained, index, lambda, fit, terms, model, kept };
  });
}

/**
 * Trains, chooses by the specification's rule and completes the model.
 * @throws ReplayError for what the data make impossible
 */
export function fitCoded(request: FitRequest): FittedModel {
  const { path, index } = choosePenalty(request.specification, trainPaths(request));
  return finishFit(request, path, index);
}

export function keptOf(fit: Pick<Fit, 'coefficients'>, terms: readonly Term[], coded: CodeMatrix): boolean[] {
  const kept = coded.characteristics.map(() => false);
  terms.forEach((term, place) => {
    if (fit.coefficients[place] !== 0) kept[term.characteristic] = true;
  });
  return kept;
}

/** Development as it was fitted, then the known outcomes of the other partitions with their own weights. */
function withOtherPartitions(prepared: Prepared, development: FitRows): FitRows {
  const others = fitRowsOf(prepared, (partition) => partition !== OUT && partition !== DEVELOPMENT);
  const weighted = development.weights !== null || others.weights !== null;
  const ones = (length: number): Float64Array => new Float64Array(length).fill(1);
  return {
    rows: joined(development.rows, others.rows),
    outcome: joined(development.outcome, others.outcome),
    weights: weighted
      ? joined(development.weights ?? ones(development.rows.length), others.weights ?? ones(others.rows.length))
      : null,
    folds: null,
    known: development.known,
  };
}

/** The numeric library's complaints about data become problems of the replay. */
function guarded<Value>(work: () => Value): Value {
  try {
    return work();
  } catch (error) {
    if (!(error instanceof NumericError)) throw error;
    const { fold } = error.where;
    throw new ReplayError([{ code: error.code, message: error.message, where: typeof fold === 'number' ? { fold } : {} }]);
  }
}
