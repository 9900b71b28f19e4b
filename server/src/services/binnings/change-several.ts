import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { Sequelize, Transaction } from 'sequelize';
import { BinningCharacteristic } from '../../models/binning';
import type { Actor } from '../../models/person';
import { Problem, notFound } from '../../problems/problem';
import { appendRecord } from '../record/append';
import type { FoundBinning } from './find-binning';
import { type FoundCharacteristic, lockCharacteristics } from './find-characteristic';
import { inclusionAsked } from './inclusion';

export interface Chosen {
  readonly id: string;
  readonly revision: number;
}

/** The chosen characteristics, locked; every one that somebody changed meanwhile is named. */
export async function lockChosen(
  sequelize: Sequelize,
  tx: Transaction,
  binning: FoundBinning,
  chosen: readonly Chosen[],
): Promise<FoundCharacteristic[]> {
  const ids = [...new Set(chosen.map(({ id }) => id))];
  const found = await lockCharacteristics(sequelize, binning.id, ids, tx);
  if (found.length !== ids.length) throw notFound();
  const revisions = new Map(chosen.map(({ id, revision }) => [id, revision]));
  const stale = found.filter(({ id, revision }) => revisions.get(id) !== revision);
  if (stale.length > 0) {
    throw new Problem(
      412,
      problemCodes.stale,
      'Someone else changed these characteristics since you read them. Look at them as they are now, then decide.',
      {
        problems: stale.map(({ column, changedBy }) => ({
          code: problemCodes.stale,
          message: `Changed by ${changedBy}.`,
          where: { column },
        })),
      },
    );
  }
  return found;
}

/** Leaves characteristics out of every later fit, with a reason, or takes them in again. */
export async function setInclusion(
  sequelize: Sequelize,
  tx: Transaction,
  person: Actor,
  binning: FoundBinning,
  asked: { characteristics: readonly Chosen[]; included: boolean; reason: string },
): Promise<void> {
  const found = (await lockChosen(sequelize, tx, binning, asked.characteristics)).filter(
    // What went out with its bins stays out once a person says so.
    (one) => one.included !== asked.included || (!asked.included && !one.inclusionDecided),
  );
  for (const one of found) {
    await BinningCharacteristic.update(
      {
        ...inclusionAsked(one.summary, asked),
        revision: one.revision + 1,
        changedAt: new Date(),
        changedBy: person.id,
      },
      { where: { id: one.id }, transaction: tx },
    );
  }
  for (const one of found) {
    const common = {
      actor: person,
      entity: 'binning-characteristic',
      entityId: one.id,
      modelId: binning.modelId,
      detail: { column: one.column },
    } as const;
    if (asked.included)
      await appendRecord(tx, { ...common, action: 'binning.taken-in', ...(asked.reason === '' ? {} : { reason: asked.reason }) });
    else await appendRecord(tx, { ...common, action: 'binning.left-out', reason: asked.reason });
  }
}
