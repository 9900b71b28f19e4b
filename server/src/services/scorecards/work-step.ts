import type { Sequelize } from 'sequelize';
import { rows } from '../../database/sql';
import type { StepReport } from '../models/work';

/** The scorecard's notch: done once its settings were saved for a fit with a chosen penalty. */
export async function scorecardWorkStep(sequelize: Sequelize, modelId: string): Promise<StepReport | null> {
  const [found] = await rows<{ chosen: boolean; kept: number | null }>(
    sequelize,
    `SELECT EXISTS (SELECT 1 FROM fit_choices c JOIN fits f ON f.id = c.fit_id WHERE f.model_id = $1) AS chosen,
            (SELECT c.kept FROM scorecards s JOIN fits f ON f.id = s.fit_id JOIN fit_choices c ON c.fit_id = f.id
              WHERE f.model_id = $1 ORDER BY s.changed_at DESC, c.sequence DESC LIMIT 1) AS kept`,
    [modelId],
  );
  if (!found.chosen) return null;
  if (found.kept === null) return { state: 'decision', caption: 'Scale to points' };
  return { state: 'done', caption: found.kept === 1 ? '1 characteristic' : `${found.kept} characteristics` };
}
