import type { KeptSamples } from '@tallystone/contracts/samples/erasure';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../../database/sql';
import type { Actor } from '../../../models/person';
import { canEraseSample } from '../../../policies/samples';
import { type Problem, conflict } from '../../../problems/problem';
import type { FoundModel } from '../../models/find-model';
import { appendRecord } from '../../record/append';
import { type FoundSample, samplesOf } from '../find-sample';

interface StoredErasure {
  readonly sampleId: string;
  readonly reason: string;
  readonly by: string;
  readonly at: Date;
}

/** The tombstones of a model's samples, by sample. */
export async function erasuresOf(sequelize: Sequelize, modelId: string, tx: Transaction | null = null): Promise<Map<string, StoredErasure>> {
  const all = await rows<StoredErasure>(
    sequelize,
    `SELECT e.sample_id AS "sampleId", e.reason, p.name AS by, e.erased_at AS at
       FROM sample_erasures e JOIN samples s ON s.id = e.sample_id JOIN people p ON p.id = e.erased_by WHERE s.model_id = $1`,
    [modelId],
    tx,
  );
  return new Map(all.map((erasure) => [erasure.sampleId, erasure]));
}

/** What is said to whoever asks for rows that are gone. */
export function noLongerReplicable({ by, at, reason }: Pick<StoredErasure, 'by' | 'at' | 'reason'>): string {
  return `No longer replicable: the rows of the sample were erased on ${at.toISOString().slice(0, 10)} by ${by}. Reason: ${reason}`;
}

/** Null while the rows are there; the refusal once they are not. */
export async function refusalOfErased(sequelize: Sequelize, modelId: string, sampleId: string, tx: Transaction | null = null): Promise<Problem | null> {
  const erasure = (await erasuresOf(sequelize, modelId, tx)).get(sampleId);
  return erasure ? conflict('no-longer-replicable', noLongerReplicable(erasure)) : null;
} // prettier-ignore

export async function keptSamples(sequelize: Sequelize, model: FoundModel, person: Actor): Promise<KeptSamples> {
  const [samples, erasures, versions] = [
    await samplesOf(sequelize, model),
    await erasuresOf(sequelize, model.id),
    await rows<{ sampleId: string; count: number }>(
      sequelize,
      `SELECT d.sample_id AS "sampleId", count(*)::int AS count FROM versions v JOIN sample_definitions d ON d.id = v.definition_id
        WHERE v.model_id = $1 GROUP BY d.sample_id`,
      [model.id],
    ),
  ];
  return {
    samples: samples.map((sample) => {
      const erasure = erasures.get(sample.id);
      return {
        id: sample.id,
        number: sample.number,
        fileName: sample.fileName,
        size: sample.size,
        sha256: sample.sha256,
        rows: sample.rows,
        receivedAt: sample.receivedAt.toISOString(),
        receivedFrom: sample.receivedFrom,
        definitions: sample.definitions,
        versions: versions.find(({ sampleId }) => sampleId === sample.id)?.count ?? 0,
        erased: erasure ? { at: erasure.at.toISOString(), by: erasure.by, reason: erasure.reason } : null,
        abilities: !erasure && canEraseSample(person, sample).allowed ? (['erase'] as const) : [],
      };
    }) as KeptSamples['samples'],
  };
}

/**
 * Erases the rows of a sample: the raw file, the columns, who is in which partition, and the codes of its binnings. Profiles, reports, counts,
 * bins and results stay, with a tombstone that says who erased the rows, when and why.
 *
 * @throws Problem 409 while something runs on it, or when it was erased already
 */
export async function eraseSample(sequelize: Sequelize, tx: Transaction, person: Actor, sample: FoundSample, reason: string): Promise<void> {
  if (sample.busy) throw conflict('busy', 'Something runs on this sample. Wait for it or cancel it first.');
  const made = await rows(
    sequelize,
    'INSERT INTO sample_erasures (sample_id, reason, erased_by) VALUES ($1, $2, $3) ON CONFLICT DO NOTHING RETURNING sample_id',
    [sample.id, reason, person.id],
    tx,
  );
  if (made.length === 0) throw conflict('erased-already', 'The rows of this sample were erased before.');
  await rows(sequelize, 'SELECT erase_sample_rows($1)', [sample.id], tx);
  await appendRecord(tx, {
    actor: person,
    action: 'sample.erased',
    entity: 'sample',
    entityId: sample.id,
    modelId: sample.modelId,
    before: { fileName: sample.fileName, size: sample.size, sha256: sample.sha256 },
    reason,
  });
} // prettier-ignore
