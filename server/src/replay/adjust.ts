import { calibration, priorCorrectedIntercept, probabilitiesOfBad, type Fit } from '@tallystone/numeric';
import type { Specification } from '@tallystone/contracts/specification/types';
import { etaOf, modelTables } from './design';
import { badRate, fitRowsOf } from './fit-rows';
import { refuse } from './problems';
import { HOLD_OUT, type CodeMatrix, type Model, type Prepared, type Term } from './types';
import type { WoeTable } from './woe';

interface AdjustInput {
  spec: Specification;
  prepared: Prepared;
  coded: CodeMatrix;
  terms: readonly Term[];
  tables: readonly (WoeTable | null)[];
  fit: Fit;
  /** Weighted bad rate of the rows the fit was made on. */
  badRateOfFit: number;
}

/**
 * Recalibration, then prior correction.
 *
 * Recalibration refits logit P(bad) = a + b logit PD on the hold-out: eta becomes b eta - a. Prior correction moves the intercept from the
 * bad rate of the rows on which the intercept was last estimated to the population's (King and Zeng 2001, from memory).
 */
export function adjusted({ spec, prepared, coded, terms, tables, fit, badRateOfFit }: AdjustInput): Model {
  let model: Model = { intercept: fit.intercept, coefficients: fit.coefficients };
  let sampleBadRate = badRateOfFit;
  if (spec.recalibration !== null) {
    const rows = fitRowsOf(prepared, (partition) => partition === HOLD_OUT);
    const bads = rows.outcome.filter((outcome) => outcome === 0).length;
    if (bads === 0 || bads === rows.rows.length) {
      refuse([{ code: 'one-class', message: 'Recalibration needs goods and bads in the hold-out.', where: {} }]);
    }
    const eta = etaOf(modelTables(model, terms, coded, tables), coded, rows.rows);
    const spread = eta.some((value) => value !== eta[0]);
    const found = calibration(probabilitiesOfBad(eta), rows.outcome, rows.weights ?? undefined);
    if (spread && !found.converged) {
      refuse([
        {
          code: 'separation',
          message: 'The hold-out is separated by the score, so recalibration has no finite slope.',
          where: {},
        },
      ]);
    }
    const slope = spread ? found.slope : 1;
    const shift = spread ? found.intercept : found.inTheLarge;
    model = {
      intercept: slope * model.intercept - shift,
      coefficients: model.coefficients.map((coefficient) => slope * coefficient),
    };
    sampleBadRate = badRate(rows);
  }
  if (spec.priorCorrection !== null) {
    const intercept = priorCorrectedIntercept(model.intercept, sampleBadRate, spec.priorCorrection.populationBadRate);
    model = { intercept, coefficients: model.coefficients };
  }
  return model;
}
