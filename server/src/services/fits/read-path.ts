import type { FitPath } from '@tallystone/contracts/fits/schema';
import type { Sequelize } from 'sequelize';
import { FittedPath } from '../../models/fit';
import { notFound } from '../../problems/problem';
import { outOfTimeState } from '../out-of-time/cover';
import { labelOf, labelsOf } from '../samples/dictionary/find';
import type { FoundFit } from './find-fit';

/**
 * The path with its metrics by partition. Out-of-time figures are not even read while they are covered.
 *
 * @throws Problem 404 while there is no path
 */
export async function readPath(sequelize: Sequelize, fit: FoundFit): Promise<FitPath> {
  const state = await outOfTimeState(sequelize, fit.definitionId);
  const columns = ['path', 'development', 'holdOut', ...(state === 'opened' ? ['outOfTime'] : [])] as (keyof FittedPath)[];
  const fitted = await FittedPath.findByPk(fit.id, { attributes: columns as string[] });
  if (!fitted) throw notFound();
  const { labels } = await labelsOf(sequelize, fit.definitionId);
  return {
    ...fitted.path,
    // A path from before there was a correction has none.
    priorCorrection: (fitted.path as Partial<FitPath>).priorCorrection ?? null,
    characteristics: fitted.path.characteristics.map((entry) => ({ ...entry, label: labelOf(labels, entry.column) })),
    development: fitted.development,
    holdOut: fitted.holdOut,
    outOfTime: state === 'opened' ? fitted.outOfTime : null,
    outOfTimeState: state,
  };
}
