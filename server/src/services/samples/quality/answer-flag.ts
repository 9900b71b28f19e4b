import type { DraftContent } from '@tallystone/contracts/samples/definition';
import type { NewFlagAnswer } from '@tallystone/contracts/samples/quality';
import type { Transaction } from 'sequelize';
import type { Context } from '../../../context';
import { rows } from '../../../database/sql';
import type { Actor } from '../../../models/person';
import { invalidField } from '../../../problems/problem';
import { appendRecord } from '../../record/append';
import { findDraft, saveDraft } from '../draft';
import type { FoundSample } from '../find-sample';
import { reportOf } from './read-report';

/**
 * Keeps an answer to a flag, with who gave it and when. "not used" takes the column out of the draft as well, in the same transaction: the next
 * definition leaves it out; one that is confirmed never changes.
 *
 * @throws Problem 422 when the report has no such flag, or the file as a whole is said to be not used
 */
export async function answerFlag(
  context: Context,
  tx: Transaction,
  person: Actor,
  sample: FoundSample,
  { column, code, answer, reason }: NewFlagAnswer,
): Promise<void> {
  const report = sample.latestDefinitionId === null ? null : await reportOf(context.sequelize, sample.latestDefinitionId, tx);
  const raised = report?.flags.some((flag) => flag.column === column && flag.code === code) ?? false;
  if (!raised) throw invalidField('code', 'no-such-flag', 'The report raises no such flag.');
  if (column === null && answer === 'not used')
    throw invalidField('answer', 'not-a-column', 'This flag concerns the file as a whole: say why it is accepted.');
  await rows(
    context.sequelize,
    `INSERT INTO quality_answers (sample_id, column_name, code, answer, reason, answered_by) VALUES ($1, $2, $3, $4, $5, $6) RETURNING id`,
    [sample.id, column, code, answer, reason, person.id],
    tx,
  );
  if (answer === 'not used') {
    const draft = await findDraft(context, sample, tx, true);
    const content = draft && leftOut(draft.content, column, reason);
    if (draft && content) await saveDraft(context, tx, person, draft, content);
  }
  await appendRecord(tx, {
    actor: person,
    action: 'sample.flag-answered',
    entity: 'sample',
    entityId: sample.id,
    modelId: sample.modelId,
    after: { column, code, answer },
    reason,
  });
}

/** The draft without the column; null where it is left out already. */
function leftOut(content: DraftContent, name: string | null, reason: string): DraftContent | null {
  const used = content.columns.some(({ column, role }) => column === name && role !== 'not used');
  if (!used) return null;
  return {
    ...content,
    columns: content.columns.map((column) =>
      column.column === name ? { ...column, role: 'not used', reason: reason.slice(0, 1000) } : column,
    ),
  };
}
