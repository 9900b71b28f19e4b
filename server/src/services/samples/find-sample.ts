import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { SampleStanding } from '../../policies/samples';
import { tombstoneOf } from '../../storage/erasure';
import { type FoundModel, findModel } from '../models/find-model';

/** A sample with its model: what policies and services about it need. */
export interface FoundSample extends SampleStanding {
  readonly id: string;
  readonly modelId: string;
  readonly number: number;
  readonly rawFileId: string;
  readonly fileName: string;
  readonly size: number;
  readonly sha256: string;
  readonly reading: ReadingChoices | null;
  readonly readingId: string | null;
  readonly rows: number | null;
  readonly columns: number | null;
  readonly duplicateRows: number | null;
  readonly problems: ProblemItem[];
  readonly receivedAt: Date;
  readonly receivedFrom: string;
  readonly definitions: number;
  readonly latestDefinitionId: string | null;
  readonly runId: string | null;
  readonly runKind: string | null;
  readonly model: FoundModel;
}

type Row = Omit<FoundSample, 'size' | 'model' | 'read' | 'busy'> & { size: string };

const select = `
  SELECT s.id, s.model_id AS "modelId", s.number, s.raw_file_id AS "rawFileId", s.file_name AS "fileName", s.size, s.sha256, s.reading,
         s.reading_id AS "readingId", s.rows, s.columns, s.duplicate_rows AS "duplicateRows", s.problems, s.received_at AS "receivedAt",
         p.name AS "receivedFrom",
         (SELECT count(*)::int FROM sample_definitions d WHERE d.sample_id = s.id) AS definitions,
         (SELECT d.id FROM sample_definitions d WHERE d.sample_id = s.id ORDER BY d.number DESC LIMIT 1) AS "latestDefinitionId",
         r.id AS "runId", r.kind AS "runKind", ${tombstoneOf('s.id')} AS erased
    FROM samples s
    JOIN people p ON p.id = s.received_by
    LEFT JOIN LATERAL (
      SELECT id, kind FROM runs WHERE entity = 'sample' AND entity_id = s.id::text AND state IN ('queued', 'running', 'cancelling')
       ORDER BY created_at DESC LIMIT 1
    ) r ON true`;

const found = (row: Row, model: FoundModel): FoundSample => ({
  ...row,
  size: Number(row.size),
  model,
  read: row.readingId !== null,
  busy: row.runId !== null,
});

/** The sample of this model, or null: under another model's address it is not there. `lock` holds its row until the transaction ends. */
export async function findSample(
  sequelize: Sequelize,
  modelId: string,
  sampleId: string,
  tx: Transaction | null = null,
  lock = false,
): Promise<FoundSample | null> {
  const model = await findModel(sequelize, modelId, tx);
  if (!model) return null;
  const [row] = await rows<Row>(
    sequelize,
    `${select} WHERE s.model_id = $1 AND s.id = $2 ${lock ? 'FOR UPDATE OF s' : ''}`,
    [modelId, sampleId],
    tx,
  );
  return row ? found(row, model) : null;
}

/** The samples of a model, the latest first. */
export async function samplesOf(sequelize: Sequelize, model: FoundModel): Promise<FoundSample[]> {
  const list = await rows<Row>(sequelize, `${select} WHERE s.model_id = $1 ORDER BY s.number DESC`, [model.id]);
  return list.map((row) => found(row, model));
}
