import type { Sequelize } from 'sequelize';
import { rows } from '../../database/sql';
import type { StepReport } from '../models/work';

/** Binning's notch: done once there are bins whose edits all have a reason; a decision while edits lack one. */
export async function binningWorkStep(sequelize: Sequelize, modelId: string): Promise<StepReport | null> {
  const [latest] = await rows<{ ready: boolean; running: boolean; included: number; unexplained: number }>(
    sequelize,
    `SELECT b.ready_at IS NOT NULL AS ready, coalesce(r.state IN ('queued', 'running', 'cancelling'), false) AS running,
            (SELECT count(*)::int FROM binning_characteristics c WHERE c.binning_id = b.id AND c.included) AS included,
            (SELECT count(*)::int FROM binning_edits e JOIN binning_characteristics c ON c.id = e.characteristic_id
              WHERE c.binning_id = b.id AND c.included AND e.place IS NOT NULL AND e.reason IS NULL) AS unexplained
       FROM binnings b LEFT JOIN runs r ON r.id = b.run_id
      WHERE b.model_id = $1 AND (b.ready_at IS NOT NULL OR r.state IN ('queued', 'running', 'cancelling'))
      ORDER BY b.number DESC LIMIT 1`,
    [modelId],
  );
  if (!latest) return null;
  if (!latest.ready) return { state: 'open', caption: 'Being classed' };
  if (latest.unexplained > 0)
    return { state: 'decision', caption: `${latest.unexplained} ${latest.unexplained === 1 ? 'edit' : 'edits'} without reason` };
  return { state: 'done', caption: `${latest.included} ${latest.included === 1 ? 'characteristic' : 'characteristics'}` };
}
