import { delong, priorCorrectedIntercept } from '@tallystone/numeric';
import type { FitPath, PenaltyMetrics, Treatment } from '@tallystone/contracts/fits/schema';
import type { PartitionName } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { codeCharacteristics } from '../replay/coding';
import { notConverged } from '../replay/cross-validation';
import { type Evaluator, PARTITION_NAMES, evaluateFit, evaluatorOf } from '../replay/evaluate';
import { type TrainedPath, keptOf, trainPaths } from '../replay/fit';
import { badRate } from '../replay/fit-rows';
import { outcomeRefits } from '../replay/outcome-refits';
import { prepare } from '../replay/prepare';
import { ReplayError, type ReplayProblem } from '../replay/problems';
import type { SourceColumn } from '../replay/source';
import { crewFor } from './crew';
import type { Task } from './task';

export interface FitPathPayload {
  readonly specification: Specification;
  readonly rows: number;
  readonly columns: ReadonlyMap<string, SourceColumn>;
  /** By column, for what is not "free". */
  readonly treatments: ReadonlyMap<string, Treatment>;
}

type Metrics = (PenaltyMetrics | null)[];
export type FitPathAnswer =
  | { readonly problems: readonly ReplayProblem[] }
  | {
      readonly problems: null;
      readonly path: Omit<FitPath, 'development' | 'holdOut' | 'outOfTime' | 'outOfTimeState'>;
      readonly metrics: Readonly<Record<PartitionName, Metrics>>;
    };

// What a run's progress is made of; the refits take what is left. Folds take ten times the work of the path; the path is fitted first.
const shareOf = { path: 0.12, folds: 0.74, evaluation: 0.09 };

/** Thrown out of the solver's loop when nobody wants the path any more; the pool ends the task with the signal's reason. */
class NotWanted extends Error {}

/**
 * Fits a penalty path with cross-validation from a sample's columns and evaluates every penalty on every partition: the whole of what a
 * person moves along afterwards without asking again.
 */
export const fitPenaltyPath: Task<FitPathPayload, FitPathAnswer> = (
  { specification, rows, columns, treatments },
  { cancelled, progress },
) => {
  const goOn = (): void => {
    if (cancelled()) throw new NotWanted('The fit was cancelled');
  };
  try {
    progress('Coding the characteristics', 0);
    const source = { rows, column: (name: string) => columns.get(name) };
    const prepared = prepare(specification, source);
    const coded = codeCharacteristics(specification, source, prepared);
    const [trained] = trainPaths({
      specification,
      prepared,
      coded,
      source,
      crewFor,
      onFit: (done, count) => {
        goOn();
        progress('Fitting the path', (shareOf.path * done) / count);
      },
      onFold: (done, count) => {
        goOn();
        progress('Cross-validating', shareOf.path + (shareOf.folds * done) / count);
      },
    });
    const evaluator = evaluatorOf(specification, prepared, coded, trained.tables);
    const correction = correctionOf(specification, trained);
    const metrics: Record<PartitionName, Metrics> = { development: [], holdOut: [], outOfTime: [] };
    trained.fits.forEach((fit, index) => {
      goOn();
      progress(
        'Evaluating every penalty',
        shareOf.path + shareOf.folds + (shareOf.evaluation * index) / trained.fits.length,
      );
      const evaluation = evaluateFit(
        evaluator,
        trained.terms,
        { ...fit, intercept: fit.intercept + (correction?.shift ?? 0) },
        { figures: 'path' },
      );
      for (const name of PARTITION_NAMES) {
        const measured = evaluation.metrics[name];
        metrics[name].push(
          measured && penaltyMetrics(measured, evaluation.scores[name].scores, evaluator.partitions[name].outcome),
        );
      }
    });
    progress('Fitting with the indeterminates as good and as bad', shareOf.path + shareOf.folds + shareOf.evaluation);
    const { minimum, oneStandardError } = trained.crossValidation ?? { minimum: 0, oneStandardError: 0 };
    const refits = outcomeRefits({ specification, prepared, coded, trained, source, crewFor, onFit: goOn, indices: [minimum, oneStandardError] });
    const kept = trained.fits.map((fit) => keptOf(fit, trained.terms, coded).filter(Boolean).length);
    return { problems: null, path: { ...pathOf(specification, trained, evaluator, kept, treatments, correction), outcomeRefits: refits }, metrics };
  } catch (error) {
    if (error instanceof ReplayError) return { problems: error.problems };
    throw error;
  }
};

/** The same for every penalty: it depends on the rows alone. Applied as the replay does it (`adjusted`), after the fit. */
function correctionOf({ priorCorrection }: Specification, { fitRows }: TrainedPath): FitPath['priorCorrection'] {
  if (priorCorrection === null) return null;
  const sampleBadRate = badRate(fitRows);
  const { populationBadRate } = priorCorrection;
  return { sampleBadRate, populationBadRate, shift: priorCorrectedIntercept(0, sampleBadRate, populationBadRate) };
}

function penaltyMetrics(
  measured: { auc: number; ks: number; brier: number; calibrationInTheLarge: number | null; calibrationSlope: number | null },
  scores: Float64Array,
  outcome: Uint8Array,
): PenaltyMetrics {
  const area = delong(scores, outcome);
  const goods = outcome.reduce((sum, value) => sum + value, 0);
  return {
    rows: outcome.length,
    goods,
    bads: outcome.length - goods,
    auc: measured.auc,
    aucLower: finite(area.lower),
    aucUpper: finite(area.upper),
    ks: measured.ks,
    brier: measured.brier,
    calibrationInTheLarge: measured.calibrationInTheLarge,
    calibrationSlope: measured.calibrationSlope,
  };
}

function pathOf(
  specification: Specification,
  trained: TrainedPath,
  evaluator: Evaluator,
  kept: number[],
  treatments: ReadonlyMap<string, Treatment>,
  correction: FitPath['priorCorrection'],
): Extract<FitPathAnswer, { problems: null }>['path'] {
  const validated = trained.crossValidation;
  const { folds } = specification.fit;
  if (validated === null || folds === null) throw new Error('A fit of the product is always cross-validated');
  // One coefficient for each characteristic: the product fits WOE, in the specification's order.
  const places = specification.characteristics.map((_, index) =>
    trained.terms.findIndex((term) => term.characteristic === index),
  );
  return {
    lambdas: trained.fits.map((fit) => fit.lambda),
    intercepts: trained.fits.map((fit) => fit.intercept + (correction?.shift ?? 0)),
    coefficients: trained.fits.map((fit) => places.map((place) => plain(fit.coefficients[place]))),
    kept,
    deviance: trained.fits.map((fit) => fit.deviance),
    nullDeviance: trained.nullDeviance,
    objective: trained.fits.map((fit) => fit.objective),
    optimalityResidual: trained.fits.map((fit) => fit.optimalityResidual),
    status: trained.fits.map((fit) => fit.status),
    largestLambda: trained.fits[0].lambda,
    stoppedEarly: trained.stoppedEarly,
    priorCorrection: correction,
    characteristics: specification.characteristics.map(({ column, kind }, index) => {
      const table = trained.tables[index];
      const { bins } = evaluator.coded.characteristics[index];
      return {
        column,
        label: column,
        kind,
        treatment: treatments.get(column) ?? 'free',
        informationValue: table?.informationValue ?? 0,
        bins: bins.map((bin, place) => ({
          label: bin.label,
          rows: table?.rows[place] ?? 0,
          goods: table?.goods[place] ?? 0,
          bads: table?.bads[place] ?? 0,
          woe: table?.woe[place] ?? 0,
        })),
      };
    }),
    crossValidation: {
      mean: [...validated.mean],
      standardError: [...validated.standardError],
      minimum: validated.minimum,
      oneStandardError: validated.oneStandardError,
      atGridEnd: validated.atGridEnd,
      ...(validated.failures ? { notConverged: notConverged(validated) } : {}),
      folds: validated.folds.length,
      classing: folds.classing,
    },
    scaling: specification.scaling,
  };
}

const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);
/** Minus zero is written as zero. */
const plain = (value: number): number => (value === 0 ? 0 : value);
