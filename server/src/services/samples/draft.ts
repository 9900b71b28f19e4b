import type { Draft, DraftCheck, DraftContent } from '@tallystone/contracts/samples/definition';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { carryOut } from './carry-out';
import { profilesOf } from './columns-of';
import { covered } from './cover-counts';
import { define } from './define';
import type { FoundSample } from './find-sample';
import { weightFaultsOf } from './weight-faults';

export interface FoundDraft {
  readonly sample: FoundSample;
  readonly content: DraftContent;
  readonly revision: number;
  readonly savedAt: Date;
  readonly savedBy: string;
}

/** The draft of a sample; null before the file has been read. `lock` holds it until the transaction ends. */
export async function findDraft(
  context: Context,
  sample: FoundSample | null,
  tx: Transaction | null = null,
  lock = false,
): Promise<FoundDraft | null> {
  if (!sample) return null;
  const [draft] = await rows<Omit<FoundDraft, 'sample'>>(
    context.sequelize,
    `SELECT d.content, d.revision, d.saved_at AS "savedAt", p.name AS "savedBy"
       FROM sample_drafts d JOIN people p ON p.id = d.saved_by WHERE d.sample_id = $1 ${lock ? 'FOR UPDATE OF d' : ''}`,
    [sample.id],
    tx,
  );
  return draft ? { ...draft, sample } : null;
}

export async function presentDraft(context: Context, draft: FoundDraft, tx: Transaction | null = null): Promise<Draft> {
  const { sample } = draft;
  const profiles = sample.readingId === null ? [] : await profilesOf(context.sequelize, sample.readingId, tx);
  const { sha256, reading } = sample;
  // Once the rows are erased there is nothing to count, and nothing to confirm.
  const weights = sample.erased ? null : await weightFaultsOf(context.sequelize, sample, draft.content, profiles);
  const problems = reading === null ? [] : define(draft.content, { sha256, reading, profiles, weights }).problems;
  return {
    content: draft.content,
    revision: draft.revision,
    savedAt: draft.savedAt.toISOString(),
    savedBy: draft.savedBy,
    problems,
  };
}

/** Saves the draft as it is now; the caller has held If-Match against its revision. A draft may be incomplete: nothing is refused here. */
export async function saveDraft(
  context: Context,
  tx: Transaction,
  person: Actor,
  draft: FoundDraft,
  content: DraftContent,
): Promise<FoundDraft> {
  await rows(
    context.sequelize,
    `UPDATE sample_drafts SET content = $2::jsonb, revision = revision + 1, saved_at = now(), saved_by = $3 WHERE sample_id = $1 RETURNING revision`,
    [draft.sample.id, JSON.stringify(content), person.id],
    tx,
  );
  const saved = await findDraft(context, draft.sample, tx);
  if (!saved) throw new Error(`The draft of sample ${draft.sample.id} is gone`);
  return saved;
}

/** What the draft would give. Out-of-time shows its rows alone: nothing of it has been opened yet. */
export async function checkDraft(context: Context, draft: FoundDraft): Promise<DraftCheck> {
  const { problems, answer } = await carryOut(context, draft.sample, draft.content);
  return problems ? { problems, counts: null } : { problems: [], counts: covered(answer.counts) };
}
