import type { Transaction } from 'sequelize';
import { RawFile, Sample } from '../../models/sample';
import type { Actor } from '../../models/person';
import { appendRecord } from '../record/append';
import type { FoundSample } from './find-sample';

/** Removes a sample on which nothing rests: its columns, its draft, its file. The record keeps that it was there. */
export async function discardSample(tx: Transaction, person: Actor, sample: FoundSample): Promise<void> {
  await Sample.destroy({ where: { id: sample.id }, transaction: tx });
  await RawFile.destroy({ where: { id: sample.rawFileId }, transaction: tx });
  await appendRecord(tx, {
    actor: person,
    action: 'sample.discarded',
    entity: 'sample',
    entityId: sample.id,
    modelId: sample.modelId,
    before: { fileName: sample.fileName, size: sample.size, sha256: sample.sha256 },
  });
}
