import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import type { Sequelize, Transaction } from 'sequelize';
import { automaticClassing, binsOfEntry, withBins } from '../../classing/definition';
import { BinningCharacteristic, BinningEdit } from '../../models/binning';
import type { Actor } from '../../models/person';
import { Problem, invalidField, notFound } from '../../problems/problem';
import { runInThread } from '../../threads/run-in-thread';
import { appendRecord } from '../record/append';
import type { FoundBinning } from './find-binning';
import { type FoundCharacteristic, lockCharacteristics } from './find-characteristic';
import { storedMonths } from './months';

interface Chosen {
  readonly id: string;
  readonly revision: number;
}

/** The chosen characteristics, locked; every one that somebody changed meanwhile is named. */
async function lockChosen(
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

/**
 * Classes characteristics anew under other constraints, from the fine classes that are counted already. Manual edits are no longer in effect
 * afterwards; they stay in the history.
 *
 * @throws Problem 412 naming those that were changed meanwhile; 422 where edits would go without a reason
 */
export async function reclassCharacteristics(
  sequelize: Sequelize,
  tx: Transaction,
  person: Actor,
  binning: FoundBinning,
  asked: { characteristics: readonly Chosen[]; constraints: Omit<AskedConstraints, 'fineClasses'>; reason: string },
): Promise<void> {
  const found = await lockChosen(sequelize, tx, binning, asked.characteristics);
  const edits = found.reduce((sum, one) => sum + one.edits, 0);
  if (edits > 0 && asked.reason === '') {
    throw invalidField(
      'reason',
      'reason-missing',
      `${edits} manual ${edits === 1 ? 'edit' : 'edits'} would no longer be in effect. Say why.`,
    );
  }
  const asking = found.map((one) => ({ ...asked.constraints, fineClasses: one.constraints.fineClasses }));
  const months: Awaited<ReturnType<typeof storedMonths>>[] = [];
  for (const { id } of found) months.push(await storedMonths(sequelize, id, tx));
  const classed = await runInThread('binning.reclass', {
    characteristics: found.map(({ fine, outOfTime }, index) => ({
      fine,
      outOfTime,
      months: months[index] && months[index].counts,
      constraints: asking[index],
    })),
  });
  for (const [index, one] of found.entries()) {
    const { automatic, constraints, summary, outOfTimeWarnings, outOfTimeCsi } = classed[index];
    await BinningCharacteristic.update(
      {
        automatic,
        constraints,
        definition: withBins(one.definition, automatic, automaticClassing(constraints)),
        summary,
        outOfTimeWarnings,
        outOfTimeCsi,
        revision: one.revision + 1,
        changedAt: new Date(),
        changedBy: person.id,
      },
      { where: { id: one.id }, transaction: tx },
    );
    await BinningEdit.update({ place: null }, { where: { characteristicId: one.id }, transaction: tx });
  }
  for (const [index, one] of found.entries()) {
    await appendRecord(tx, {
      actor: person,
      action: 'binning.reclassed',
      entity: 'binning-characteristic',
      entityId: one.id,
      modelId: binning.modelId,
      before: binsOfEntry(one.definition),
      after: classed[index].automatic,
      detail: { column: one.column, constraints: classed[index].constraints, editsDropped: one.edits },
      ...(asked.reason === '' ? {} : { reason: asked.reason }),
    });
  }
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
    (one) => one.included !== asked.included,
  );
  for (const one of found) {
    await BinningCharacteristic.update(
      {
        included: asked.included,
        leftOutReason: asked.included ? '' : asked.reason,
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
