import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { RunState } from '@tallystone/contracts/runs/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

/** A run as one reader finds it. */
export interface RunRow {
  readonly id: string;
  readonly kind: string;
  readonly state: RunState;
  readonly phase: string | null;
  readonly share: number | null;
  readonly attempt: number;
  readonly personId: string;
  readonly modelId: string | null;
  readonly entity: string | null;
  readonly entityId: string | null;
  readonly startedBy: string;
  readonly createdAt: Date;
  readonly startedAt: Date | null;
  readonly endedAt: Date | null;
  readonly result: unknown;
  readonly problem: ProblemItem | null;
  readonly isMember: boolean;
}

/** `$1` is the reader. */
const select = `
  SELECT r.id, r.kind, r.state, r.phase, r.share, r.attempt, r.person_id AS "personId", r.model_id AS "modelId", r.entity, r.entity_id AS "entityId",
    p.name AS "startedBy", r.created_at AS "createdAt", r.started_at AS "startedAt", r.ended_at AS "endedAt", r.result, r.problem,
    EXISTS (SELECT 1 FROM model_members m WHERE m.model_id = r.model_id AND m.person_id = $1) AS "isMember"
  FROM runs r JOIN people p ON p.id = r.person_id`;

export async function findRun(
  sequelize: Sequelize,
  runId: string,
  readerId: string,
  tx: Transaction | null = null,
): Promise<RunRow | null> {
  const [run] = await rows<RunRow>(sequelize, `${select} WHERE r.id = $2`, [readerId, runId], tx);
  return run ?? null;
}

/** The same for a run that is known to be there. */
export async function describeRun(
  sequelize: Sequelize,
  runId: string,
  readerId: string,
  tx: Transaction | null = null,
): Promise<RunRow> {
  const run = await findRun(sequelize, runId, readerId, tx);
  if (!run) throw new Error(`Run ${runId} is gone`);
  return run;
}

/** Own runs, or those of a model, the latest 200 first. Whether the reader may see each is for the policy. */
export function listRuns(
  sequelize: Sequelize,
  readerId: string,
  filter: { modelId?: string; active: boolean },
): Promise<RunRow[]> {
  const values: unknown[] = [readerId];
  const where = [filter.modelId ? `r.model_id = $${values.push(filter.modelId)}` : 'r.person_id = $1'];
  if (filter.active) where.push(`r.state IN ('queued', 'running', 'cancelling')`);
  return rows<RunRow>(sequelize, `${select} WHERE ${where.join(' AND ')} ORDER BY r.created_at DESC LIMIT 200`, values);
}
