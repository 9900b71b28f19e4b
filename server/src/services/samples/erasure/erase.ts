import type { NewErasure } from '@tallystone/contracts/samples/erasure';
import type { Transaction } from 'sequelize';
import type { Context } from '../../../context';
import { rows } from '../../../database/sql';
import { endRunsOnRows } from '../../../jobs/end-runs';
import type { Actor } from '../../../models/person';
import { conflict, invalidField } from '../../../problems/problem';
import { rowsErased } from '../../../problems/rows-erased';
import { appendRecord } from '../../record/append';
import { type FoundSample, findSample } from '../find-sample';

/**
 * Erases the rows of a sample: the raw file, the columns, who is in which partition, and the codes of its binnings. Profiles, reports, counts,
 * bins, fits, points, versions and documents stay, with a tombstone that says who erased the rows, when and why. Runs that read the rows,
 * queued or under way, end in the same transaction.
 *
 * @throws Problem 409 when it was erased already, 422 when the name of the file is another
 */
export async function eraseSample(
  context: Pick<Context, 'sequelize'>,
  tx: Transaction,
  person: Actor,
  sample: FoundSample,
  { reason, fileName }: NewErasure,
): Promise<void> {
  const { sequelize } = context;
  if (fileName !== sample.fileName) throw invalidField('fileName', 'another-name', `The file of this sample is named ${sample.fileName}.`);
  // Runs before the sample: a run that is just writing what it came to holds itself first as well, and neither waits for the other.
  await rows(
    sequelize,
    `SELECT id FROM runs WHERE sample_id = $1 AND state IN ('queued', 'running', 'cancelling') ORDER BY id FOR UPDATE`,
    [sample.id],
    tx,
  );
  await rows(sequelize, 'SELECT id FROM samples WHERE id = $1 FOR UPDATE', [sample.id], tx);
  const made = await rows(
    sequelize,
    'INSERT INTO sample_erasures (sample_id, reason, erased_by) VALUES ($1, $2, $3) ON CONFLICT DO NOTHING RETURNING sample_id',
    [sample.id, reason, person.id],
    tx,
  );
  const erased = (await findSample(sequelize, sample.modelId, sample.id, tx))?.erased;
  if (!erased) throw new Error(`Sample ${sample.id} has no tombstone`);
  const said = rowsErased(erased);
  if (made.length === 0) throw conflict('erased-already', said.detail);
  const runsEnded = await endRunsOnRows(context, tx, sample.id, { code: said.code, message: said.detail, where: {} });
  await rows(sequelize, 'SELECT erase_sample_rows($1)', [sample.id], tx);
  // Places in a file that is gone.
  await rows(sequelize, 'UPDATE samples SET doubtful = NULL WHERE id = $1 RETURNING id', [sample.id], tx);
  // Labels of categories that a few rows may hold, of what was never confirmed; that the partitions were compared stays.
  await rows(sequelize, 'UPDATE sample_draft_comparisons SET characteristics = NULL WHERE sample_id = $1 RETURNING id', [sample.id], tx);
  const [{ versions }] = await rows<{ versions: number }>(
    sequelize,
    'SELECT count(*)::int AS versions FROM versions v JOIN sample_definitions d ON d.id = v.definition_id WHERE d.sample_id = $1',
    [sample.id],
    tx,
  );
  await appendRecord(tx, {
    actor: person,
    action: 'sample.erased',
    entity: 'sample',
    entityId: sample.id,
    modelId: sample.modelId,
    before: { fileName: sample.fileName, size: sample.size, sha256: sample.sha256 },
    detail: { versions, runsEnded },
    reason,
  });
}
