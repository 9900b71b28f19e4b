import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { Transaction } from 'sequelize';
import type { Context } from '../context';
import { rows } from '../database/sql';
import { endRun, takeRunsOnRows } from './run-state';

/**
 * Ends every run that reads the rows of a sample, queued or under way, with the same problem. An attempt under way can write nothing from then on:
 * its fence is down. Its worker hears of it by the same channel as a cancellation and stops. What the handler of a run would clear away is the
 * caller's to clear.
 *
 * @returns how many there were
 */
export async function endRunsOnRows(context: Pick<Context, 'sequelize'>, tx: Transaction, sampleId: string, problem: ProblemItem): Promise<number> {
  const runs = await takeRunsOnRows(context, tx, sampleId);
  for (const run of runs) {
    await endRun(context, tx, run, undefined, { state: 'failed', outcome: 'failed', problem });
    await rows(context.sequelize, `SELECT pg_notify('tallystone_cancel', $1)`, [run.id], tx);
  }
  return runs.length;
}
