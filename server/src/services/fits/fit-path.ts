import type { FitPath } from '@tallystone/contracts/fits/schema';
import type { Specification } from '@tallystone/contracts/specification/types';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { Sequelize, Transaction } from 'sequelize';
import { Fit, FittedPath } from '../../models/fit';
import { Problem } from '../../problems/problem';
import type { FitPathAnswer } from '../../threads/fit-path';
import { runInThread } from '../../threads/run-in-thread';
import { findDefinition } from '../samples/definitions';
import { loadColumns } from '../samples/load-columns';

type Fitted = Extract<FitPathAnswer, { problems: null }>;

/**
 * Runs the path of a fit from the sample's stored columns and the fit's own specification, whatever happened to the binning since.
 *
 * @throws Problem 422 with what the data make impossible
 */
export async function fitPath(
  sequelize: Sequelize,
  fitId: string,
  options: { signal: AbortSignal; onProgress: (phase: string, share: number | null) => void },
): Promise<Fitted> {
  const fit = await Fit.findByPk(fitId, { raw: true });
  if (!fit) throw new Error(`There is no fit ${fitId}`);
  const definition = await findDefinition(sequelize, fit.definitionId);
  if (!definition) throw new Error(`Fit ${fitId} has no sample definition`);
  const specification = JSON.parse(fit.specification) as Specification;
  options.onProgress('Reading the columns', 0);
  const { rows, columns } = await loadColumns(sequelize, definition.sampleId, specification);
  const treatments = new Map(fit.settings.characteristics.map((entry) => [entry.column, entry.treatment]));
  const answer = await runInThread('fit.path', { specification, rows, columns, treatments }, options);
  if (answer.problems !== null) {
    throw new Problem(422, problemCodes.invalid, answer.problems.map((problem) => problem.message).join(' '), {
      problems: answer.problems.map(({ code, message }) => ({ code, message, where: {} })),
    });
  }
  return answer;
}

/** Keeps the path, once. */
export async function storePath(tx: Transaction, fitId: string, run: { id: string; attempt: number }, { path, metrics }: Fitted): Promise<void> {
  await FittedPath.create(
    {
      fitId,
      runId: run.id,
      attempt: run.attempt,
      path: path satisfies Omit<FitPath, 'development' | 'holdOut' | 'outOfTime' | 'outOfTimeState'>,
      development: metrics.development,
      holdOut: metrics.holdOut,
      outOfTime: metrics.outOfTime.some((entry) => entry !== null) ? metrics.outOfTime : null,
    },
    { transaction: tx },
  );
}
