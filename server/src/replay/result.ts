import type { Fit } from '@tallystone/numeric';
import type { Result, ResultBin, ResultCharacteristic, ResultPathPoint } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { bandEdges, bandsOf, characteristicStability, scoreStability } from './bands';
import { notConverged } from './cross-validation';
import { evaluateFit, evaluatorOf, type Evaluation, type Evaluator } from './evaluate';
import type { FittedModel, Method } from './fit';
import type { CodeMatrix, Prepared, Term } from './types';

/** The solver's name in a result. Its version is the product's. */
export const SOLVER_NAMES: Record<Method, string> = {
  standard: 'coordinate descent',
  independent: 'accelerated proximal gradient',
};

/** A fit counts as converged if its optimality residual is at most this (numerics: the chosen fit's). */
const REPORTED_RESIDUAL = 1e-9;

export interface ResultInput {
  specification: Specification;
  specificationSha256: string;
  dataSha256: string;
  prepared: Prepared;
  coded: CodeMatrix;
  fitted: FittedModel;
  method?: Method;
  /** The product's version, for `solver.version`. */
  version: string;
}

/**
 * Assembles the result of a fitted model: tables, points, metrics, bands, stability. No time stamp and nothing random is in it.
 * @example const result = buildResult({ specification, specificationSha256, dataSha256, prepared, coded, fitted, version });
 */
export function buildResult(input: ResultInput): Result {
  const { specification: spec, prepared, coded, fitted } = input;
  const { trained, fit, model, terms } = fitted;
  const evaluator = evaluatorOf(spec, prepared, coded, trained.tables);
  const evaluation = evaluateFit(evaluator, terms, model);
  const bands = bandsOf(bandEdges(spec.bands, evaluation.scores.development.scores), evaluator, evaluation);
  const validated = trained.crossValidation;
  return {
    format: 'tallystone-result',
    formatVersion: 1,
    specificationSha256: input.specificationSha256,
    dataSha256: input.dataSha256,
    solver: { name: SOLVER_NAMES[input.method ?? 'standard'], version: input.version },
    counts: prepared.counts,
    characteristics: coded.characteristics.map((_, index) => characteristicOf(index, spec, coded, fitted, evaluator, evaluation)),
    intercept: model.intercept,
    lambda: fitted.lambda,
    mixing: trained.mixing,
    kept: evaluation.tables.kept.filter(Boolean).length,
    objective: fit.objective,
    deviance: fit.deviance,
    optimalityResidual: fit.optimalityResidual,
    converged: fit.status !== 'separation' && fit.optimalityResidual <= REPORTED_RESIDUAL,
    basePoints: evaluation.points.basePoints,
    path: trained.fits.map((one) => pathPoint(one, trained.terms, coded)),
    crossValidation:
      validated === null
        ? null
        : {
            lambda: [...validated.lambdas],
            mean: [...validated.mean],
            standardError: [...validated.standardError],
            minimum: validated.minimum,
            oneStandardError: validated.oneStandardError,
            atGridEnd: validated.atGridEnd,
            ...(validated.failures ? { notConverged: notConverged(validated) } : {}),
          },
    metrics: evaluation.metrics,
    weightedMetrics: evaluation.weightedMetrics,
    bands,
    psi: {
      holdOut: scoreStability(bands, 'holdOut', spec.psi.smoothing),
      outOfTime: scoreStability(bands, 'outOfTime', spec.psi.smoothing),
    },
  };
}

function characteristicOf(
  index: number,
  spec: Specification,
  coded: CodeMatrix,
  fitted: FittedModel,
  evaluator: Evaluator,
  evaluation: Evaluation,
): ResultCharacteristic {
  const { characteristic, bins, codes } = coded.characteristics[index];
  const coefficients = coefficientsOf(index, fitted.model.coefficients, fitted.terms, coded);
  const table = fitted.trained.tables[index];
  if (codes === null || table === null) {
    const coefficient = typeof coefficients === 'number' ? coefficients : 0;
    return {
      column: characteristic.column,
      informationValue: null,
      coefficient,
      bins: [],
      csi: { holdOut: null, outOfTime: null },
    };
  }
  const points = evaluation.points.points[index];
  const rounded = evaluation.points.pointsRounded[index];
  return {
    column: characteristic.column,
    informationValue: table.informationValue,
    coefficient: typeof coefficients === 'number' ? coefficients : null,
    bins: bins.map((bin, place): ResultBin => ({
      label: bin.label,
      rows: table.rows[place],
      goods: table.goods[place],
      bads: table.bads[place],
      woe: table.woe[place],
      ...(typeof coefficients === 'number' ? {} : { coefficient: coefficients[place] }),
      points: points?.[place] ?? 0,
      pointsRounded: rounded?.[place] ?? 0,
    })),
    csi: {
      holdOut: characteristicStability(codes, bins.length, evaluator, 'holdOut', spec.psi.smoothing),
      outOfTime: characteristicStability(codes, bins.length, evaluator, 'outOfTime', spec.psi.smoothing),
    },
  };
}

/** One coefficient, or one per bin with "indicator" (0 for a reference bin and for a characteristic that is left out). */
function coefficientsOf(index: number, coefficients: Float64Array, terms: readonly Term[], coded: CodeMatrix): number | number[] {
  let single = 0;
  const { characteristic, bins } = coded.characteristics[index];
  const perBin = bins.map(() => 0);
  terms.forEach((term, place) => {
    if (term.characteristic !== index) return;
    if (term.kind === 'bin') perBin[term.bin] = plain(coefficients[place]);
    else single = plain(coefficients[place]);
  });
  return characteristic.coding === 'indicator' ? perBin : single;
}

function pathPoint(fit: Fit, terms: readonly Term[], coded: CodeMatrix): ResultPathPoint {
  const coefficients = Object.fromEntries(
    coded.characteristics.map(({ characteristic }, index) => [
      characteristic.column,
      coefficientsOf(index, fit.coefficients, terms, coded),
    ]),
  );
  return {
    lambda: fit.lambda,
    intercept: fit.intercept,
    coefficients,
    deviance: fit.deviance,
    optimalityResidual: fit.optimalityResidual,
  };
}

/** Minus zero is written as zero. */
function plain(value: number): number {
  return value === 0 ? 0 : value;
}
