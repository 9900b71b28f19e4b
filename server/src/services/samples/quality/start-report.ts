import type { Transaction } from 'sequelize';
import type { Context } from '../../../context';
import { reportQualityJob } from '../../../jobs/definitions/samples';
import { startRun } from '../../../jobs/start-run';
import type { Run } from '../../../models/run';

/** Starts the run that makes the report of a definition, or gives the one that is under way. */
export function startReport(
  context: Pick<Context, 'sequelize' | 'boss'>,
  tx: Transaction,
  asked: { definitionId: string; modelId: string; person: { readonly id: string }; requestId?: string },
): Promise<Run> {
  const { definitionId, modelId, person, requestId } = asked;
  return startRun(context, tx, reportQualityJob, {
    payload: { definitionId },
    person,
    modelId,
    entity: 'sample-definition',
    entityId: definitionId,
    rowsOf: { definitionId },
    singleton: definitionId,
    requestId,
  });
}
