import type { Sequelize } from 'sequelize';
import { rows } from '../../database/sql';
import type { StepReport } from '../models/work';

/** The sample's notch: done once a definition is confirmed, a decision while a file waits for its reading or its definition. */
export async function sampleWorkStep(sequelize: Sequelize, modelId: string): Promise<StepReport | null> {
  const [counts] = await rows<{ samples: number; kept: number; read: number; definitions: number; development: number | null }>(
    sequelize,
    `WITH own AS (SELECT s.*, EXISTS (SELECT 1 FROM sample_erasures e WHERE e.sample_id = s.id) AS erased FROM samples s WHERE model_id = $1)
     SELECT (SELECT count(*)::int FROM own) AS samples,
            (SELECT count(*)::int FROM own WHERE NOT erased) AS kept,
            (SELECT count(*)::int FROM own WHERE reading_id IS NOT NULL AND NOT erased) AS read,
            (SELECT count(*)::int FROM sample_definitions WHERE model_id = $1) AS definitions,
            (SELECT (counts #>> '{partitions,development,rows}')::int FROM sample_definitions WHERE model_id = $1 ORDER BY created_at DESC, number DESC LIMIT 1)
              AS development`,
    [modelId],
  );
  if (counts.samples === 0) return null;
  if (counts.definitions > 0) return { state: 'done', caption: `${thin(counts.development ?? 0)} in development` };
  if (counts.kept === 0) return { state: 'open', caption: 'Rows erased' };
  if (counts.read > 0) return { state: 'decision', caption: 'Define outcome and partition' };
  return { state: 'decision', caption: 'Confirm how the file is read' };
}

const thin = (value: number): string => String(value).replace(/\B(?=(\d{3})+(?!\d))/g, '\u202f');
