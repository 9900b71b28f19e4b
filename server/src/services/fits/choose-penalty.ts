import type { NewChoice } from '@tallystone/contracts/fits/schema';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { Fit, FittedPath, PenaltyChoice } from '../../models/fit';
import type { Actor } from '../../models/person';
import { Problem } from '../../problems/problem';
import { appendRecord } from '../record/append';
import { type FoundFit, findFit } from './find-fit';

/**
 * Writes down which penalty is taken. A rule is held against the path: a choice "by the one-standard-error rule" is only that where the rule
 * points there.
 *
 * @throws Problem 422 when the place is not on the path or the rule does not point to it
 */
export async function choosePenalty(context: Context, tx: Transaction, fit: FoundFit, person: Actor, choice: NewChoice): Promise<FoundFit> {
  const fitted = await FittedPath.findByPk(fit.id, { attributes: ['path'], transaction: tx });
  if (!fitted) throw new Error(`Fit ${fit.id} is ready without a path`);
  const { lambdas, kept, crossValidation } = fitted.path;
  const { index, rule } = choice;
  const reason = choice.reason ?? '';
  if (index >= lambdas.length) throw invalid(`The path has ${lambdas.length} penalties; there is no number ${index + 1}.`, 'index');
  const pointed = rule === 'minimum' ? crossValidation.minimum : rule === 'one-standard-error' ? crossValidation.oneStandardError : index;
  if (pointed !== index) throw invalid(`The ${rule} rule points to penalty ${pointed + 1} of this path, not to ${index + 1}.`, 'rule');

  const after = { index, lambda: lambdas[index], kept: kept[index], rule };
  await PenaltyChoice.create({ fitId: fit.id, place: index, lambda: after.lambda, kept: after.kept, rule, reason, chosenBy: person.id }, { transaction: tx });
  await Fit.increment('revision', { where: { id: fit.id }, transaction: tx });
  await appendRecord(tx, {
    actor: person,
    action: 'fit.penalty-chosen',
    entity: 'fit',
    entityId: fit.id,
    modelId: fit.modelId,
    before: fit.choice && { index: fit.choice.place, lambda: fit.choice.lambda, kept: fit.choice.kept, rule: fit.choice.rule },
    after,
    reason,
  });
  return (await findFit(context.sequelize, fit.id, tx))!;
}

function invalid(message: string, field: string): Problem {
  return new Problem(422, problemCodes.invalid, 'This choice does not fit the path.', { problems: [{ code: problemCodes.invalid, message, where: { field } }] });
}
