import type { KeptSamples, KeptUpload } from '@tallystone/contracts/samples/erasure';
import type { Sequelize } from 'sequelize';
import { rows } from '../../../database/sql';
import type { Actor } from '../../../models/person';
import { canEraseSample, seesUploadsOfOthers } from '../../../policies/samples';
import type { FoundModel } from '../../models/find-model';
import { samplesOf } from '../find-sample';

interface Resting {
  readonly sampleId: string;
  readonly binnings: number;
  readonly fits: number;
  readonly versions: number;
  readonly runs: number;
}

/** What is kept of applicants in a model, the latest first: files and what rests on them, and what has arrived of files on their way. */
export async function keptSamples(sequelize: Sequelize, model: FoundModel, person: Actor): Promise<KeptSamples> {
  const [samples, resting, uploads] = await Promise.all([
    samplesOf(sequelize, model),
    rows<Resting>(
      sequelize,
      `SELECT s.id AS "sampleId",
              (SELECT count(*)::int FROM binnings b JOIN sample_definitions d ON d.id = b.definition_id WHERE d.sample_id = s.id AND b.ready_at IS NOT NULL) AS binnings,
              (SELECT count(*)::int FROM fits f JOIN sample_definitions d ON d.id = f.definition_id JOIN fit_paths p ON p.fit_id = f.id WHERE d.sample_id = s.id) AS fits,
              (SELECT count(*)::int FROM versions v JOIN sample_definitions d ON d.id = v.definition_id WHERE d.sample_id = s.id) AS versions,
              (SELECT count(*)::int FROM runs r WHERE r.sample_id = s.id AND r.state IN ('queued', 'running', 'cancelling')) AS runs
         FROM samples s WHERE s.model_id = $1`,
      [model.id],
    ),
    rows<Omit<KeptUpload, 'arrived' | 'size' | 'seenAt'> & { arrived: string; size: string; seenAt: Date }>(
      sequelize,
      `SELECT u.id, u.file_name AS "fileName", u.received AS arrived, u.size, p.name AS "from", u.seen_at AS "seenAt"
         FROM raw_files u JOIN people p ON p.id = u.person_id WHERE u.model_id = $1 AND u.completed_at IS NULL AND (u.person_id = $2 OR $3) ORDER BY u.started_at DESC`,
      [model.id, person.id, seesUploadsOfOthers(person)],
    ),
  ]);
  const none = { binnings: 0, fits: 0, versions: 0, runs: 0 };
  return {
    samples: samples.map((sample) => {
      const { binnings, fits, versions, runs } = resting.find(({ sampleId }) => sampleId === sample.id) ?? none;
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
        binnings,
        fits,
        versions,
        runs,
        erased: sample.erased,
        abilities: sample.erased === null && canEraseSample(person, sample).allowed ? ['erase'] : [],
      };
    }),
    uploads: uploads.map((upload) => ({ ...upload, arrived: Number(upload.arrived), size: Number(upload.size), seenAt: upload.seenAt.toISOString() })),
  };
}
