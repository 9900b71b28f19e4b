import type { OutOfTimeCover } from '@tallystone/contracts/out-of-time/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { type CoverStanding, canOpenOutOfTime } from '../../policies/out-of-time';
import { conflict } from '../../problems/problem';
import { tombstoneOf } from '../../storage/erasure';
import { type FoundModel, findModel } from '../models/find-model';
import { appendRecord } from '../record/append';
import { openingsOver } from './openings';

export { outOfTimeOpened, outOfTimeState } from './state';

/** A sample definition as far as its cover needs it. */
export interface CoveredDefinition extends CoverStanding {
  readonly id: string;
  readonly outOfTimeRows: number;
  readonly model: FoundModel;
}

/** The definition with its model, or null. */
export async function findCovered(
  sequelize: Sequelize,
  definitionId: string,
  tx: Transaction | null = null,
): Promise<CoveredDefinition | null> {
  const [found] = await rows<{ modelId: string; outOfTimeRows: number; erased: CoverStanding['erased'] }>(
    sequelize,
    `SELECT model_id AS "modelId", (counts #>> '{partitions,outOfTime,rows}')::int AS "outOfTimeRows", ${tombstoneOf('sample_definitions.sample_id')} AS erased
       FROM sample_definitions WHERE id = $1`,
    [definitionId],
    tx,
  );
  const model = found && (await findModel(sequelize, found.modelId, tx));
  return model ? { id: definitionId, outOfTimeRows: found.outOfTimeRows, model, erased: found.erased } : null;
}

export async function readCover(
  sequelize: Sequelize,
  person: Actor,
  definition: CoveredDefinition,
  tx: Transaction | null = null,
): Promise<OutOfTimeCover> {
  const openings = await openingsOver(sequelize, definition.id, tx);
  const state = definition.outOfTimeRows === 0 ? 'none' : openings.some(({ under }) => under === 'this') ? 'opened' : 'covered';
  return {
    definitionId: definition.id,
    state,
    openings,
    abilities: state !== 'none' && canOpenOutOfTime(person, definition).allowed ? ['open'] : [],
  };
}

/**
 * Lifts the cover, or adds a further look with its own reason. Recorded in the same transaction.
 *
 * @throws Problem 409 where the definition has no out-of-time rows
 */
export async function openOutOfTime(
  sequelize: Sequelize,
  tx: Transaction,
  person: Actor,
  definition: CoveredDefinition,
  reason: string,
): Promise<void> {
  if (definition.outOfTimeRows === 0)
    throw conflict('no-out-of-time', 'This sample has no out-of-time rows: there is nothing to open.');
  // One look at a time, so that each knows how many there were before.
  await rows(sequelize, 'SELECT pg_advisory_xact_lock(hashtext($1))', [`out-of-time ${definition.model.id}`], tx);
  const before = await openingsOver(sequelize, definition.id, tx);
  await rows(
    sequelize,
    `INSERT INTO out_of_time_openings (definition_id, number, reason, opened_by)
     SELECT $1, count(*) + 1, $2, $3 FROM out_of_time_openings WHERE definition_id = $1 RETURNING number`,
    [definition.id, reason, person.id],
    tx,
  );
  await appendRecord(tx, {
    actor: person,
    action: 'out-of-time.opened',
    entity: 'sample-definition',
    entityId: definition.id,
    modelId: definition.model.id,
    detail: { earlier: before.length },
    reason,
  });
}
