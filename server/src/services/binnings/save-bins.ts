import type { EditReason } from '@tallystone/contracts/binnings/edits';
import type { SaveBins } from '@tallystone/contracts/binnings/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { summarise } from '../../classing/automatic';
import { automaticClassing, binsOfEntry, withBins } from '../../classing/definition';
import { BinningCharacteristic, BinningEdit } from '../../models/binning';
import type { Actor } from '../../models/person';
import { conflict, invalid } from '../../problems/problem';
import { appendRecord } from '../record/append';
import { checkBins, checkEdits, sameBins } from './check-bins';
import { type StoredEdit, editsById, editsInEffect } from './edits';
import type { OnBench } from './find-characteristic';
import { type Inclusion, inclusionOf, recordInclusion } from './inclusion';
import { storedMonths } from './months';

/**
 * Saves the bench of one characteristic: its bins and the edits that made them. The row is locked and its revision has been matched. Everything
 * is calculated again here. An edit that is no longer listed was undone; each edit, each one undone and each reason given goes into the record.
 *
 * Reasons alone do not make a new revision: the bins are the same, and what was fitted on them is not stale.
 *
 * @throws Problem 422 with everything that is wrong with bins and edits
 */
export async function saveBins(
  sequelize: Sequelize,
  tx: Transaction,
  person: Actor,
  { binning, characteristic }: OnBench,
  sent: SaveBins,
): Promise<void> {
  const { fine, automatic, constraints, outOfTime } = characteristic;
  const problems = [
    ...checkBins(fine, sent.bins),
    ...sent.edits.flatMap((edit) => checkBins(fine, edit.after)),
    ...checkEdits(automatic, sent.bins, sent.edits),
  ];
  if (problems.length > 0) throw invalid(problems);
  const before = await editsInEffect(sequelize, characteristic.id, tx);
  const known = new Map(
    (
      await editsById(
        sequelize,
        sent.edits.map(({ id }) => id),
        tx,
      )
    ).map((edit) => [edit.id, edit]),
  );
  for (const edit of sent.edits) requireSame(known.get(edit.id), edit, characteristic.id);

  const current = binsOfEntry(characteristic.definition, fine.pooled);
  let inclusion: Inclusion = characteristic;
  if (
    !sameBins(current, sent.bins) ||
    before.length !== sent.edits.length ||
    before.some((edit, place) => edit.id !== sent.edits[place].id)
  ) {
    const months = await storedMonths(sequelize, characteristic.id, tx);
    const classing = sent.edits.length > 0 ? ({ made: 'by hand' } as const) : automaticClassing(constraints);
    const summarised = summarise({ fine, outOfTime, months: months && months.counts }, sent.bins, constraints);
    inclusion = inclusionOf(summarised.summary, characteristic);
    await BinningCharacteristic.update(
      {
        definition: withBins(characteristic.definition, sent.bins, classing, fine.pooled),
        ...summarised,
        ...inclusion,
        revision: characteristic.revision + 1,
        changedAt: new Date(),
        changedBy: person.id,
      },
      { where: { id: characteristic.id }, transaction: tx },
    );
  }
  const common = {
    actor: person,
    entity: 'binning-characteristic',
    entityId: characteristic.id,
    modelId: binning.modelId,
  } as const;
  const listed = new Set(sent.edits.map(({ id }) => id));
  const records: (() => Promise<unknown>)[] = [];
  // From the last back, as a person undoes.
  for (const edit of [...before].reverse()) {
    if (listed.has(edit.id)) continue;
    await BinningEdit.update({ place: null }, { where: { id: edit.id }, transaction: tx });
    records.push(() =>
      appendRecord(tx, {
        ...common,
        action: 'binning.edit-undone',
        before: edit.after,
        after: edit.before,
        detail: { column: characteristic.column, edit: edit.id, what: edit.what },
      }),
    );
  }
  for (const [place, edit] of sent.edits.entries()) {
    const stored = known.get(edit.id);
    const detail = { column: characteristic.column, edit: edit.id, what: edit.what };
    const { reason } = edit;
    if (!stored) {
      await BinningEdit.create({ ...edit, characteristicId: characteristic.id, place, madeBy: person.id }, { transaction: tx });
      records.push(() =>
        appendRecord(tx, {
          ...common,
          action: 'binning.edited',
          before: edit.before,
          after: edit.after,
          detail: { ...detail, kind: edit.kind },
          ...(reason ? { reason: words(reason) } : {}),
        }),
      );
      continue;
    }
    // A client that has not heard of a reason yet does not take it away.
    const given = reason && words(reason) !== words(stored.reason) ? reason : null;
    if (stored.place !== place || given) {
      await BinningEdit.update({ place, ...(given ? { reason: given } : {}) }, { where: { id: edit.id }, transaction: tx });
    }
    if (stored.place === null) {
      records.push(() =>
        appendRecord(tx, { ...common, action: 'binning.edit-redone', before: edit.before, after: edit.after, detail }),
      );
    }
    if (given) records.push(() => appendRecord(tx, { ...common, action: 'binning.reason-given', detail, reason: words(given) }));
  }
  const { id, column } = characteristic;
  records.push(() => recordInclusion(tx, person, { id, modelId: binning.modelId, column }, characteristic, inclusion));
  // The record's lock is taken last and held for as short as can be.
  for (const append of records) await append();
}

/** An edit that is known says what it said: who sends it again cannot change what was done. */
function requireSame(stored: StoredEdit | undefined, sent: SaveBins['edits'][number], characteristicId: string): void {
  if (!stored) return;
  const same =
    stored.characteristicId === characteristicId &&
    stored.kind === sent.kind &&
    stored.what === sent.what &&
    sameBins(stored.before, sent.before) &&
    sameBins(stored.after, sent.after);
  if (!same) throw conflict('edit-known', 'An edit with this id has been saved and says something else.');
}

export function words(reason: EditReason | null): string {
  if (!reason) return '';
  return reason.text === '' ? reason.code : reason.code === 'other' ? reason.text : `${reason.code}: ${reason.text}`;
}
