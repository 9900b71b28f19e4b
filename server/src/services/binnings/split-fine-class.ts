import type { Sequelize } from 'sequelize';
import { rows } from '../../database/sql';
import { inTransaction } from '../../database/transaction';
import { BinningCharacteristic } from '../../models/binning';
import { conflict, invalidField } from '../../problems/problem';
import { openSample } from '../../storage/columnStore';
import { mostFineEdges } from '../../classing/fine-classes';
import { runInThread } from '../../threads/run-in-thread';
import { findDefinition, loadPrepared } from '../samples/definitions';
import { shared } from './class-characteristics';
import { type OnBench, findOnBench } from './find-characteristic';
import { loadRowMonths, storeMonths } from './months';

/**
 * Splits a fine class at a value, from the stored column, so that a cut can lie exactly there. Bins and revision stay as they are: the same
 * counts are only told apart more finely.
 *
 * @throws Problem 422 where the value separates nothing, 409 where a byte holds no more fine classes
 */
export async function splitFineClass(sequelize: Sequelize, found: OnBench, edge: number): Promise<void> {
  const { binning, characteristic } = found;
  if (characteristic.kind !== 'numeric') throw invalidField('edge', 'wrong-kind', 'Only a numeric characteristic has cuts.');
  const { range } = characteristic.fine;
  if (!range || edge <= range[0] || edge > range[1]) {
    const between = range ? ` Development has values from ${range[0]} to ${range[1]}.` : '';
    throw invalidField('edge', 'separates-nothing', `A cut at ${edge} would leave a bin without a value.${between}`);
  }
  const definition = await findDefinition(sequelize, binning.definitionId);
  const defined = definition?.content.columns.find(({ column }) => column === characteristic.column);
  if (!definition || !defined) throw new Error(`Column ${characteristic.column} is not defined`);
  const source = await openSample(sequelize, definition.sampleId, [characteristic.column]);
  const column = source.column(characteristic.column);
  if (!column) throw new Error(`The sample has no column ${characteristic.column}`);
  const counted = shared(await loadPrepared(sequelize, definition.id));
  const months = await loadRowMonths(sequelize, definition.sampleId, definition.content);
  let { fine } = characteristic;
  // Somebody else may split the same characteristic meanwhile: then the count is made again on what they left.
  while (!fine.edges.includes(edge)) {
    if (fine.edges.length >= mostFineEdges(fine.special.length))
      throw conflict('too-many-fine-classes', `There are ${fine.edges.length + 1} fine classes, which is the most there can be.`);
    const split = await runInThread('binning.split', {
      defined: { column: characteristic.column, kind: 'numeric', special: defined.special },
      column,
      data: definition.content.data,
      counted,
      fine,
      edge,
      months,
    });
    const expected = fine.edges.length;
    const left = await inTransaction(sequelize, async (tx) => {
      await rows(sequelize, 'SELECT id FROM binning_characteristics WHERE id = $1 FOR UPDATE', [characteristic.id], tx);
      const now = await findOnBench(sequelize, binning.id, characteristic.id, tx);
      if (!now) throw new Error(`Characteristic ${characteristic.id} is gone`);
      if (now.characteristic.fine.edges.length !== expected) return now.characteristic.fine;
      await BinningCharacteristic.update(
        { fine: split.fine, outOfTime: split.outOfTime },
        { where: { id: characteristic.id }, transaction: tx },
      );
      await storeMonths(sequelize, tx, characteristic.id, split.months);
      return split.fine;
    });
    fine = left;
  }
}
