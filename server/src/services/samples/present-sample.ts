import type { Sample, SampleList, SampleSummary, UploadSummary } from '@tallystone/contracts/samples/schema';
import type { Sequelize } from 'sequelize';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { abilitiesOnSample, canAddSample } from '../../policies/samples';
import type { FoundModel } from '../models/find-model';
import { type FoundSample, samplesOf } from './find-sample';
import { readSampleJob } from '../../jobs/definitions/samples';

function summaryOf(sample: FoundSample): SampleSummary {
  const reading = sample.runKind === readSampleJob.kind;
  return {
    id: sample.id,
    modelId: sample.modelId,
    number: sample.number,
    fileName: sample.fileName,
    size: sample.size,
    sha256: sample.sha256,
    state: reading ? 'reading' : sample.readingId === null ? 'received' : 'ready',
    rows: sample.rows,
    columns: sample.columns,
    definitions: sample.definitions,
    latestDefinitionId: sample.latestDefinitionId,
    runId: sample.runId,
    receivedAt: sample.receivedAt.toISOString(),
    receivedFrom: sample.receivedFrom,
    erased: sample.erased,
  };
}

export const presentSample = (sample: FoundSample, person: Actor): Sample => ({
  ...summaryOf(sample),
  reading: sample.reading,
  problems: sample.problems,
  abilities: abilitiesOnSample(person, sample),
});

/** Samples of a model, and the person's own files on their way: those of others are nobody's business until they have arrived. */
export async function listSamples(sequelize: Sequelize, model: FoundModel, person: Actor): Promise<SampleList> {
  const samples = await samplesOf(sequelize, model);
  const uploads = await rows<
    Omit<UploadSummary, 'size' | 'offset' | 'startedAt' | 'seenAt'> & {
      size: string;
      offset: string;
      startedAt: Date;
      seenAt: Date;
    }
  >(
    sequelize,
    `SELECT id, file_name AS "fileName", size, received AS "offset", started_at AS "startedAt", seen_at AS "seenAt"
       FROM raw_files WHERE model_id = $1 AND person_id = $2 AND completed_at IS NULL ORDER BY started_at DESC`,
    [model.id, person.id],
  );
  return {
    samples: samples.map(summaryOf),
    uploads: uploads.map((upload) => ({
      ...upload,
      size: Number(upload.size),
      offset: Number(upload.offset),
      startedAt: upload.startedAt.toISOString(),
      seenAt: upload.seenAt.toISOString(),
    })),
    abilities: canAddSample(person, model).allowed ? ['add'] : [],
  };
}
