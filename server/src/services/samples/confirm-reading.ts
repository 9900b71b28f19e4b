import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { readSampleJob } from '../../jobs/definitions/samples';
import { startRun } from '../../jobs/start-run';
import type { Actor } from '../../models/person';
import type { Run } from '../../models/run';
import { conflict, invalid } from '../../problems/problem';
import type { FoundSample } from './find-sample';

/**
 * Starts the run that reads the file under these choices.
 *
 * @throws Problem 422 for choices that contradict each other, 409 while something runs on the sample
 */
export async function confirmReading(
  context: Context,
  tx: Transaction,
  person: Actor,
  sample: FoundSample,
  choices: ReadingChoices,
  requestId: string,
): Promise<Run> {
  const problems = [];
  const { decimal, thousands } = choices;
  if (thousands === decimal) {
    problems.push({
      code: 'signs-equal',
      message: 'The decimal sign and the thousands sign are the same. Choose two different ones.',
      where: { part: 'body', field: 'thousands' },
    });
  }
  if (new Set(choices.missing).size !== choices.missing.length) {
    problems.push({
      code: 'token-twice',
      message: 'A missing token is listed twice.',
      where: { part: 'body', field: 'missing' },
    });
  }
  if (problems.length > 0) throw invalid(problems);
  if (sample.busy) throw conflict('busy', 'Something runs on this sample already. Wait for it or cancel it.');
  return startRun(context, tx, readSampleJob, {
    // An empty field is missing, whatever else is.
    payload: {
      sampleId: sample.id,
      choices: { ...choices, missing: choices.missing.includes('') ? choices.missing : ['', ...choices.missing] },
    },
    person,
    modelId: sample.modelId,
    entity: 'sample',
    entityId: sample.id,
    rowsOf: { sampleId: sample.id },
    singleton: sample.id,
    requestId,
  });
}
