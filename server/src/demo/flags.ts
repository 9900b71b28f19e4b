import type { NewFlagAnswer } from '@tallystone/contracts/samples/quality';
import type { Context } from '../context';
import { inTransaction } from '../database/transaction';
import type { Actor } from '../models/person';
import type { FoundModel } from '../services/models/find-model';
import { findSample } from '../services/samples/find-sample';
import { answerFlag } from '../services/samples/quality/answer-flag';
import { reportOf } from '../services/samples/quality/read-report';
import { startReport } from '../services/samples/quality/start-report';
import { runToEnd } from './run-to-end';

/** What Mara has looked into. The enquiries, which drift as well, are left to whoever opens the page. */
const answers: readonly NewFlagAnswer[] = [
  {
    column: 'outcome_12m',
    code: 'missing-drift',
    answer: 'accepted',
    reason:
      'Declined applications have no outcome, and more were declined in the spring of 2025. Among accepted ones none is missing.',
  },
  {
    column: 'form_minutes',
    code: 'mostly-missing',
    answer: 'accepted',
    reason: 'Only the web form keeps the time; everyone else is missing by design and has a bin of their own.',
  },
  {
    column: 'channel',
    code: 'drift',
    answer: 'accepted',
    reason: 'Brokers were taken on in January 2025. That half-year is kept out-of-time, so that the shift shows there.',
  },
];

/** Some flags of the demo's quality report, answered before the version is frozen, which keeps them. */
export async function ensureDemoAnswers(
  context: Context,
  model: FoundModel,
  modeller: Actor,
  { sampleId, definitionId }: { readonly sampleId: string; readonly definitionId: string },
): Promise<void> {
  const { sequelize } = context;
  // The run that confirming the definition started, where it has not ended yet.
  if (!(await reportOf(sequelize, definitionId)))
    await runToEnd(context, (tx) =>
      startReport(context, tx, { definitionId, modelId: model.id, person: modeller, requestId: 'demo' }),
    );
  const report = await reportOf(sequelize, definitionId);
  const open = answers.filter(({ column, code }) =>
    report?.flags.some((flag) => flag.column === column && flag.code === code && flag.answer === null),
  );
  if (open.length === 0) return;
  await inTransaction(sequelize, async (tx) => {
    const sample = await findSample(sequelize, model.id, sampleId, tx, true);
    if (sample) for (const answer of open) await answerFlag(context, tx, modeller, sample, answer);
  });
}
