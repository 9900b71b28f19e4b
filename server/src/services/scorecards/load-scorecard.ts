import type { ScorecardSettings } from '@tallystone/contracts/scorecards/schema';
import type { BinnedCharacteristic, Specification } from '@tallystone/contracts/specification/types';
import type { Sequelize, Transaction } from 'sequelize';
import { Fit, FittedPath } from '../../models/fit';
import { ScorecardRow } from '../../models/scorecard';
import { conflict } from '../../problems/problem';
import type { FoundFit } from '../fits/find-fit';
import { permissionsIn, permittedOn } from '../permissions/permitted';
import { labelOf, labelsOf } from '../samples/dictionary/find';
import { defaultBands, defaultReasons, defaultScaling, withChoice } from '../specifications/build-specification';

/** A fit at its chosen penalty with the settings that make it a scorecard. */
export interface LoadedScorecard {
  readonly settings: ScorecardSettings;
  readonly revision: number;
  /** The whole specification that a version of this scorecard would have. */
  readonly specification: Specification;
  /** Only the characteristics kept: what scores are made of. */
  readonly scoring: Specification;
  readonly intercept: number;
  readonly kept: readonly KeptCharacteristic[];
}

export interface KeptCharacteristic {
  readonly definition: BinnedCharacteristic;
  readonly label: string;
  readonly coefficient: number;
  readonly informationValue: number;
  readonly bins: readonly { label: string; rows: number; goods: number; bads: number; woe: number }[];
}

export const defaultSettings: ScorecardSettings = {
  scaling: defaultScaling,
  bands: defaultBands,
  reasons: defaultReasons,
  cutOff: null,
};

/** @throws Problem 409 while no penalty is chosen */
export async function loadScorecard(sequelize: Sequelize, fit: FoundFit, tx: Transaction | null = null): Promise<LoadedScorecard> {
  const { choice } = fit;
  if (fit.state !== 'ready' || !choice) {
    throw conflict('no-penalty-chosen', 'No penalty of this fit is chosen yet. Choose one on its path first.');
  }
  // One after the other: the connection of a transaction carries one query at a time.
  const row = await Fit.findByPk(fit.id, { attributes: ['specification'], raw: true, transaction: tx });
  const saved = await ScorecardRow.findByPk(fit.id, { raw: true, transaction: tx });
  const fitted = await FittedPath.findByPk(fit.id, { attributes: ['path'], raw: true, transaction: tx });
  if (!row || !fitted) throw new Error(`Fit ${fit.id} is ready without a path`);
  const { path } = fitted;
  const { labels } = await labelsOf(sequelize, fit.definitionId, tx);
  const settings = saved?.settings ?? defaultSettings;
  const chosen = withChoice(JSON.parse(row.specification) as Specification, { rule: choice.rule, index: choice.place }, path.lambdas);
  const permissions = permissionsIn(chosen, await permittedOn(sequelize, fit.definitionId, tx));
  const specification: Specification = { ...chosen, ...settings, ...(permissions.length > 0 && { permissions }) };
  const coefficients = path.coefficients[choice.place];
  const kept = specification.characteristics.flatMap((entry, j): KeptCharacteristic[] => {
    if (coefficients[j] === 0 || entry.coding === 'linear') return [];
    const { informationValue, bins } = path.characteristics[j];
    return [{ definition: entry, label: labelOf(labels, entry.column), coefficient: coefficients[j], informationValue, bins }];
  });
  return {
    settings,
    revision: saved?.revision ?? 0,
    specification,
    scoring: { ...specification, characteristics: kept.map(({ definition }) => definition) },
    intercept: path.intercepts[choice.place],
    kept,
  };
}
