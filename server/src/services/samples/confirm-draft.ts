import { createHash, randomUUID } from 'node:crypto';
import canonicalize from 'canonicalize';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { confirmSampleJob } from '../../jobs/definitions/samples';
import type { Actor } from '../../models/person';
import type { Run } from '../../models/run';
import { SampleDefinition } from '../../models/sample';
import { Problem } from '../../problems/problem';
import { storeAssignment } from '../../storage/assignmentStore';
import { unflaggedBy } from '../permissions/unflagged';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { balanceOf, storeBalance } from './balance';
import { profilesOf } from './columns-of';
import type { FoundDraft } from './draft';
import { carryOutDraft, startOnDraft } from './draft-run';
import { hideIdentifiers, identifiersInClear, neededInClear, storeHidden } from './hide-identifiers';
import { startReport } from './quality/start-report';

/**
 * Starts the run that confirms the draft as it was last read.
 *
 * @throws Problem 412 when the draft was saved since, 422 with everything that can be seen to stand in the way, 409 while something runs
 */
export async function confirmDraft(
  context: Context,
  tx: Transaction,
  person: Actor,
  draft: FoundDraft,
  revision: number,
  requestId: string,
): Promise<Run> {
  const { sample } = draft;
  const profiles = sample.readingId === null ? [] : await profilesOf(context.sequelize, sample.readingId, tx);
  const further = await neededInClear(context.sequelize, sample.id, identifiersInClear(draft.content.columns, profiles), tx);
  return startOnDraft(context, tx, confirmSampleJob, { person, draft, revision, requestId, further });
}

/** What confirming needs of the run that does it. */
export interface ConfirmingRun {
  readonly context: Context;
  readonly run: { readonly personId: string };
  readonly signal: AbortSignal;
  progress(phase: string, share: number | null): void;
  finish(work: (tx: Transaction) => Promise<{ definitionId: string; number: number }>): Promise<void>;
}

/**
 * Carries out the draft on every row and keeps it, with its counts and who is in which partition, as an immutable definition. Its identifiers
 * that were in clear are kept as keyed hashes from then on.
 */
export async function confirmDefinition(payload: { sampleId: string; revision: number }, run: ConfirmingRun): Promise<void> {
  const { context } = run;
  run.progress('counting', 0.1);
  const { sample, content, answer } = await carryOutDraft(context, payload, run.signal);
  const balance = await balanceOf(context, sample, content, answer.prepared, {
    signal: run.signal,
    onColumn: (done, count) => run.progress('comparing the partitions', 0.4 + (0.4 * done) / count),
  });
  run.progress('hashing identifiers', 0.8);
  const hidden = await hideIdentifiers(context, sample, content.columns, run.signal);
  run.progress('storing', 0.9);
  const id = randomUUID();
  await run.finish(async (tx) => {
    await rows(context.sequelize, 'SELECT id FROM samples WHERE id = $1 FOR UPDATE', [sample.id], tx);
    // A definition that was confirmed since this run was started may read a column that is to be hidden.
    const names = hidden.map(({ profile }) => profile.column);
    const needed = await neededInClear(context.sequelize, sample.id, names, tx);
    if (needed.length > 0) throw new Problem(422, 'not-confirmed', needed[0].message, { problems: needed });
    if (sample.readingId !== null) await storeHidden(context.sequelize, tx, sample.readingId, hidden);
    const [{ number }] = await rows<{ number: number }>(
      context.sequelize,
      'SELECT coalesce(max(number), 0)::int + 1 AS number FROM sample_definitions WHERE sample_id = $1',
      [sample.id],
      tx,
    );
    const sha256 = createHash('sha256')
      .update(canonicalize(content) ?? '')
      .digest('hex');
    const { counts, result, prepared } = answer;
    await SampleDefinition.create(
      {
        id,
        sampleId: sample.id,
        modelId: sample.modelId,
        number,
        content,
        counts: { ...counts, result },
        sha256,
        createdBy: run.run.personId,
      },
      { transaction: tx },
    );
    await storeAssignment(context.sequelize, tx, id, prepared);
    await storeBalance(context, tx, id, balance);
    await appendRecord(tx, {
      actor: await actorOf(run.run.personId, tx),
      action: 'sample.defined',
      entity: 'sample',
      entityId: sample.id,
      modelId: sample.modelId,
      after: {
        definitionId: id,
        number,
        sha256,
        development: result.development.rows,
        holdOut: result.holdOut.rows,
        outOfTime: result.outOfTime.rows,
        ...(names.length === 0 ? {} : { hashed: names }),
      },
    });
    const unflagged = await unflaggedBy(context.sequelize, id, tx);
    if (unflagged.length > 0) {
      await appendRecord(tx, {
        actor: await actorOf(run.run.personId, tx),
        action: 'protected-column.unflagged',
        entity: 'sample-definition',
        entityId: id,
        modelId: sample.modelId,
        after: { columns: unflagged.map(({ column, role, sample: of, definition }) => ({ column, role, sample: of, definition })) },
        reason: unflagged.flatMap(({ column, reason }) => (reason ? [`${column}: ${reason}`] : [])).join('; ') || undefined,
      });
    }
    // Nobody waits for the report, so it is a run of its own.
    await startReport(context, tx, { definitionId: id, modelId: sample.modelId, person: { id: run.run.personId } });
    return { definitionId: id, number };
  });
}
