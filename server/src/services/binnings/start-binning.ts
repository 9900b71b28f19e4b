import { randomUUID } from 'node:crypto';
import type { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { classBinningJob } from '../../jobs/definitions/binnings';
import { startRun } from '../../jobs/start-run';
import { Binning } from '../../models/binning';
import type { Actor } from '../../models/person';
import { invalidField } from '../../problems/problem';
import type { FoundModel } from '../models/find-model';
import { permittedOn } from '../permissions/permitted';
import { appendRecord } from '../record/append';
import { refuseErased } from '../../storage/erasure';
import { findDefinition } from '../samples/definitions';
import { splitColumns } from './barred';
import { type FoundBinning, findBinning } from './find-binning';

/**
 * Enters a binning and starts the run that classes its characteristics.
 *
 * @throws Problem 422 where the definition is not of this model or has nothing to class, 409 where the rows of its sample were erased
 */
export async function startBinning(
  context: Pick<Context, 'sequelize' | 'boss'>,
  tx: Transaction,
  asked: {
    model: Pick<FoundModel, 'id'>;
    person: Actor;
    definitionId: string;
    name: string;
    constraints: AskedConstraints;
    fromBinningId?: string | null;
    requestId?: string;
  },
): Promise<FoundBinning> {
  const { model, person, name, constraints } = asked;
  const definition = await findDefinition(context.sequelize, asked.definitionId, tx);
  if (!definition || definition.modelId !== model.id) {
    throw invalidField('definitionId', 'no-such-definition', 'This model has no such confirmed sample. Choose another.');
  }
  await refuseErased(context.sequelize, { definitionId: definition.id }, tx);
  const { taken, barred } = splitColumns(definition.content.columns, await permittedOn(context.sequelize, definition.id, tx));
  if (taken.length === 0) {
    throw invalidField(
      'definitionId',
      'nothing-to-class',
      'No column of this sample is a characteristic that may be classed. Give columns that role first.',
    );
  }
  const fromBinningId = asked.fromBinningId ?? null;
  const from = fromBinningId === null ? null : await findBinning(context.sequelize, fromBinningId, tx);
  if (fromBinningId !== null && (from?.modelId !== model.id || from.state !== 'ready')) {
    throw invalidField(
      'fromBinningId',
      'no-such-binning',
      'This model has no such binning that is ready. Choose another to start from.',
    );
  }
  const id = randomUUID();
  // Binnings of a model are numbered one after the other: the model's row is the queue.
  await rows(context.sequelize, 'SELECT id FROM models WHERE id = $1 FOR UPDATE', [model.id], tx);
  const [{ next }] = await rows<{ next: number }>(
    context.sequelize,
    'SELECT coalesce(max(number), 0) + 1 AS next FROM binnings WHERE model_id = $1',
    [model.id],
    tx,
  );
  await Binning.create(
    {
      id,
      modelId: model.id,
      definitionId: definition.id,
      number: next,
      name,
      constraints,
      barred,
      fromBinningId,
      createdBy: person.id,
    },
    { transaction: tx },
  );
  const run = await startRun(context, tx, classBinningJob, {
    payload: { binningId: id },
    person,
    modelId: model.id,
    entity: 'binning',
    entityId: id,
    rowsOf: { definitionId: definition.id },
    requestId: asked.requestId,
  });
  await Binning.update({ runId: run.id }, { where: { id }, transaction: tx });
  await appendRecord(tx, {
    actor: person,
    action: 'binning.started',
    entity: 'binning',
    entityId: id,
    modelId: model.id,
    after: { name, definitionId: definition.id, constraints, ...(fromBinningId === null ? {} : { fromBinningId }) },
  });
  return (await findBinning(context.sequelize, id, tx))!;
}
